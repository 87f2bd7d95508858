import { spawn } from 'node:child_process';
import { createServer, type IncomingMessage } from 'node:http';
import type { AddressInfo } from 'node:net';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { rigInput } from '@/server/contract';
import { curlSnippet, nodeSnippet } from '@/client/screens/connect/snippets';
import { testSignal } from '@/client/screens/connect/test-signal';
import type { RigSetup } from '@/signal/model';

type Seen = { url: string; headers: IncomingMessage['headers']; body: string };
const seen: Seen[] = [];
const hub = createServer((req, res) => {
  let body = '';
  req.on('data', (part: Buffer) => (body += part.toString()));
  req.on('end', () => {
    seen.push({ url: req.url ?? '', headers: req.headers, body });
    res.writeHead(202, { 'Content-Type': 'application/json' }).end('{}');
  });
});
let address = '';

beforeAll(async () => {
  await new Promise<void>((ready) => hub.listen(0, '127.0.0.1', ready));
  address = `http://127.0.0.1:${(hub.address() as AddressInfo).port}`;
});
afterAll(() => {
  hub.close();
});

/** Pastes the text into a shell, as a person would. */
async function paste(text: string): Promise<Seen[]> {
  seen.length = 0;
  const shell = spawn('bash', ['-s'], { stdio: ['pipe', 'ignore', 'pipe'] });
  let complaint = '';
  shell.stderr.on('data', (part: Buffer) => (complaint += part.toString()));
  shell.stdin.end(text);
  const code = await new Promise((done) => shell.on('close', done));
  expect({ code, complaint }).toEqual({ code: 0, complaint: '' });
  return [...seen];
}

const setup = (more: object): RigSetup =>
  rigInput.parse({
    name: 'x',
    sensing: 'quadrature',
    wheel: { pulsesPerTurn: 24 },
    channels: [
      { name: 'A', role: 'A', maxInputV: 3.3 },
      { name: 'B', role: 'B', maxInputV: 3.3 },
    ],
    ratedRpm: 1500,
    ...more,
  });

const rises = (volts: number[], level: number) =>
  volts.flatMap((v, i) => (i > 0 && volts[i - 1]! < level && v >= level ? [i] : []));

describe('the Node lines', () => {
  it('stream blocks in order, with the key in the header and nowhere else', async () => {
    const signal = testSignal(setup({}));
    const posts = await paste(nodeSnippet({ hub: address, key: 'k.e-y_1', signal, seconds: 0.3 }));
    expect(posts).toHaveLength(3);
    const blocks = posts.map((p) => JSON.parse(p.body));
    expect(posts.every((p) => p.url === '/ingest/v1/samples')).toBe(true);
    expect(posts.every((p) => p.headers.authorization === 'Bearer k.e-y_1')).toBe(true);
    expect(blocks.map((b) => b.seq)).toEqual([0, 1, 2]);
    expect(new Set(blocks.map((b) => b.stream)).size).toBe(1);
    const a: number[] = blocks.flatMap((b) => b.samples.A);
    const b: number[] = blocks.flatMap((b) => b.samples.B);
    expect(a).toHaveLength(0.3 * signal.rateHz);
    // 600 teeth a second for 0.3 s; A rises a quarter of a tooth before B.
    const [firstA = 0, secondA = 0] = rises(a, 1.65);
    const firstB = rises(b, 1.65).find((i) => i > firstA) ?? 0;
    expect(rises(a, 1.65)).toHaveLength(180);
    expect((firstB - firstA) / (secondA - firstA)).toBeCloseTo(0.25, 1);
    expect(Math.max(...a)).toBeLessThan(3.3);
    expect(Math.min(...a)).toBeGreaterThan(0);
  });

  it('fails loudly when the hub refuses', async () => {
    const text = nodeSnippet({
      hub: 'http://127.0.0.1:1',
      key: 'k',
      signal: testSignal(setup({})),
      seconds: 0.1,
    });
    await expect(paste(text)).rejects.toThrow();
  });
});

describe('the curl lines', () => {
  it('post even rows with the missing teeth left out', async () => {
    const wheel = { pulsesPerTurn: 20, missingPulses: 2 };
    const signal = testSignal(setup({ sensing: 'single', wheel, channels: [{ name: 'hall.1', role: 'A' }] }));
    const [post] = await paste(curlSnippet({ hub: address, key: 'k.e-y_1', signal, seconds: 1 }));
    expect(post?.headers).toMatchObject({
      authorization: 'Bearer k.e-y_1',
      'content-type': 'text/csv',
      'turnmark-rate': String(signal.rateHz),
    });
    const [header, ...rows] = (post?.body ?? '').trim().split('\n');
    expect(header).toBe('t,hall.1');
    expect(rows).toHaveLength(signal.rateHz);
    const cells = rows.map((row) => row.split(',').map(Number));
    expect(cells.every(([t], i) => Math.abs(t! - i / signal.rateHz) < 1e-6)).toBe(true);
    // 500 positions a second, 18 teeth in 20.
    expect(
      rises(
        cells.map(([, v]) => v!),
        1.65,
      ),
    ).toHaveLength(450);
  });
});

describe('testSignal', () => {
  it('turns at the rated speed where a script can', () => {
    expect(testSignal(setup({}))).toMatchObject({ shaftRpm: 1500, toothHz: 600, rateHz: 20000 });
  });

  it('turns slower where the teeth would come too fast', () => {
    const signal = testSignal(setup({ wheel: { pulsesPerTurn: 1000, gearRatio: 2 }, ratedRpm: 6000 }));
    expect(signal).toMatchObject({ toothHz: 2000, shaftRpm: 60, rateHz: 50000 });
  });

  it('stays inside what the converter shows and the input takes', () => {
    const channels = [
      {
        name: 'A',
        role: 'A',
        voltsPerCode: 0.001,
        codeOffset: 2048,
        minCode: 0,
        maxCode: 4095,
        maxInputV: 1.5,
      },
    ];
    const [a] = testSignal(setup({ sensing: 'single', channels })).channels;
    expect(a?.restV).toBeGreaterThan(-2.048);
    expect(a?.toothV).toBeLessThan(1.5);
  });

  it('turns the volts round for a sensor that pulls low, and spreads three-hall by thirds', () => {
    const channels = ['U', 'V', 'W'].map((name) => ({
      name,
      role: name,
      sensor: { kind: 'latch', activeLow: true },
    }));
    const made = testSignal(setup({ sensing: 'three-hall', channels })).channels;
    expect(made.map((c) => c.behind)).toEqual([0, 1 / 3, 2 / 3]);
    expect(made.every((c) => c.steep && c.restV > c.toothV)).toBe(true);
  });

  it('samples coded pulses finely enough', () => {
    const widthClasses = [{ widthS: 0.00009, means: 'forward' }];
    const wheel = { pulsesPerTurn: 48, widthClasses };
    const signal = testSignal(setup({ sensing: 'width-coded', wheel, channels: [{ name: 'A', role: 'A' }] }));
    expect(signal.pulseWidthS).toBe(0.00009);
    expect(signal.rateHz * 0.00009).toBeGreaterThanOrEqual(5);
  });
});
