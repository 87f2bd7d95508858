import { Encoder, decodeMultiple } from 'cbor-x';
import { WaveFile } from 'wavefile';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { decodeCbor } from '@/ingest/decoders/cbor';
import { decodeJson } from '@/ingest/decoders/json';
import type { Capture, Problem, Rig, RigKeyCreated, Samples } from '@/server/contract';
import { startHub } from './api-harness';
import type { Ask, TestHub } from './api-harness';

let hub: TestHub;
let engineer: Ask;
let token: string;
let rig: Rig;
let board: Ask;
let whole: Capture;
let broken: Capture;

const rateHz = 2000;
const codesA = (from: number, count: number) =>
  Array.from({ length: count }, (_, i) => ((from + i) * 37) % 4096);
const codesB = (from: number, count: number) =>
  Array.from({ length: count }, (_, i) => 4095 - (((from + i) * 11) % 4096));
const block = (stream: string, seq: number, from: number, count: number) => ({
  stream,
  seq,
  rate: rateHz,
  time: 100 + from / rateHz,
  codes: true,
  samples: { A: codesA(from, count), B: codesB(from, count) },
});

const channel = (name: string, role: string) => ({
  name,
  role,
  voltsPerCode: 0.0008,
  codeOffset: 10,
  minCode: 0,
  maxCode: 4095,
});

async function download(id: string, format: string) {
  const response = await fetch(`${hub.url}/api/v1/captures/${id}/export?format=${format}`, {
    headers: { Authorization: `Bearer ${token}` },
  });
  return {
    status: response.status,
    headers: response.headers,
    bytes: new Uint8Array(await response.arrayBuffer()),
  };
}

async function upload(
  name: string,
  content: string | Uint8Array,
  fields: Record<string, string | string[]> = {},
) {
  const form = new FormData();
  for (const [key, value] of Object.entries({ rigId: rig.id, ...fields })) {
    for (const one of [value].flat()) form.append(key, one);
  }
  form.append('file', new Blob([content as BlobPart]), name);
  const response = await fetch(`${hub.url}/api/v1/captures`, {
    method: 'POST',
    headers: { Authorization: `Bearer ${token}` },
    body: form,
  });
  return { status: response.status, body: (await response.json()) as Capture & Problem };
}

/** Volts of a channel, sample by sample. */
async function volts(capture: Capture, name: string) {
  const path = `/api/v1/captures/${capture.id}/samples?channel=${name}&points=20000`;
  return (await engineer<Samples>('GET', path)).body.v;
}

beforeAll(async () => {
  hub = await startHub();
  const person = await hub.signIn('engineer');
  engineer = person.ask;
  token = person.token;
  const setup = {
    name: 'Two heads',
    sensing: 'quadrature',
    wheel: { pulsesPerTurn: 12 },
    channels: [channel('A', 'A'), channel('B', 'B')],
  };
  rig = (await engineer<Rig>('POST', '/api/v1/rigs', setup)).body;
  const key = await engineer<RigKeyCreated>('POST', `/api/v1/rigs/${rig.id}/keys`, { name: 'board' });
  board = hub.asking(key.body.key);
  const keep = async () =>
    (await engineer<Capture>('POST', `/api/v1/rigs/${rig.id}/captures`, { lastSeconds: 60 })).body;
  await board('POST', '/ingest/v1/samples', [block('whole', 0, 0, 3000), block('whole', 1, 3000, 3001)]);
  whole = await keep();
  const later = Array.from({ length: 64 }, (_, i) => block('broken', 3 + i, 4000 + i * 20, 20));
  await board('POST', '/ingest/v1/samples', [block('broken', 0, 0, 2000), ...later]);
  broken = await keep();
});
afterAll(() => hub.close());

describe('export', () => {
  it('starts from captures as meant', () => {
    expect(whole).toMatchObject({ durationS: 6001 / rateHz, channels: ['A', 'B'] });
    expect(broken.durationS).toBe((4000 + 64 * 20) / rateHz);
  });

  it('as CSV has seconds and volts, and no row for what was lost', async () => {
    const { bytes, headers } = await download(broken.id, 'csv');
    expect(headers.get('content-disposition')).toBe(`attachment; filename="turnmark-${broken.id}.csv"`);
    const rows = Buffer.from(bytes).toString().trimEnd().split('\r\n');
    expect(rows[0]).toBe('t,A,B');
    expect(rows.length).toBe(1 + 2000 + 64 * 20);
    expect(rows[2]).toBe('0.0005,0.0216,3.2592');
    expect(rows[2001]?.split(',')[0]).toBe('2');
  });

  it('as CBOR is a sequence of batches that the boards’ door takes', async () => {
    const { bytes } = await download(broken.id, 'cbor');
    const batches = decodeMultiple(bytes) as unknown[];
    const blocks = batches.flatMap((batch) => {
      const read = decodeCbor(new Encoder({ useRecords: false }).encode(batch));
      if (!read.ok) throw new Error(read.issue.detail);
      return read.blocks.map((result) => (result.ok ? result.block : undefined));
    });
    expect(blocks.map((b) => b?.seq)).toEqual(
      Array.from({ length: blocks.length }, (_, i) => (i === 0 ? 0 : i + 1)),
    );
    expect(blocks[0]!.channels[0]!.samples).toEqual(Int32Array.from(codesA(0, 2000)));
    expect(blocks[1]).toMatchObject({ timeS: 2, rateHz });
  });

  it('as JSON is a batch a line', async () => {
    const { bytes } = await download(whole.id, 'json');
    const lines = Buffer.from(bytes).toString().trimEnd().split('\n');
    const all = lines.flatMap((line) => {
      const read = decodeJson(Buffer.from(line));
      if (!read.ok || !read.blocks[0]?.ok) throw new Error('not readable');
      return Array.from(read.blocks[0].block.channels[1]!.samples);
    });
    expect(all).toEqual(codesB(0, 6001));
  });

  it('as WAV is read by another program’s reader', async () => {
    const { bytes, headers } = await download(whole.id, 'wav');
    expect(headers.get('content-type')).toBe('audio/wav');
    const wav = new WaveFile(bytes);
    expect(wav.fmt).toMatchObject({ audioFormat: 1, numChannels: 2, sampleRate: rateHz, bitsPerSample: 16 });
    const [a, b] = wav.getSamples(false, Int16Array) as unknown as Int16Array[];
    expect(Array.from(a!)).toEqual(codesA(0, 6001));
    expect(Array.from(b!)).toEqual(codesB(0, 6001));
  });

  it('as WAV is refused where samples were lost, with the reason', async () => {
    const { status, bytes } = await download(broken.id, 'wav');
    expect(status).toBe(422);
    expect(JSON.parse(Buffer.from(bytes).toString())).toMatchObject({
      type: 'urn:turnmark:problem:cannot-export',
    });
  });
});

describe('upload', () => {
  it.each(['cbor', 'json', 'wav'])('of what was exported as %s gives the same samples', async (format) => {
    const { bytes } = await download(whole.id, format);
    const back = await upload(`again.${format}`, bytes, { tags: ['x', 'y'], title: 'Again' });
    expect(back.status).toBe(201);
    expect(back.body).toMatchObject({
      title: 'Again',
      tags: ['x', 'y'],
      durationS: whole.durationS,
      rateHz,
      rigId: rig.id,
    });
    expect(await volts(back.body, 'A')).toEqual(await volts(whole, 'A'));
    expect(await volts(back.body, 'B')).toEqual(await volts(whole, 'B'));
  });

  it.each(['cbor', 'json'])('of a capture with a gap as %s keeps the gap', async (format) => {
    const { bytes } = await download(broken.id, format);
    const back = await upload(`gap.${format === 'json' ? 'jsonl' : format}`, bytes);
    expect(back.body.durationS).toBe(broken.durationS);
    expect(await volts(back.body, 'A')).toEqual(await volts(broken, 'A'));
    expect(back.body.findings.map(({ code }) => code)).toContain('lost-samples');
  });

  it('of blocks takes a gap as on the wire, also where the clock is beyond reason', async () => {
    const at = (seq: number, time: number) => ({
      stream: 's',
      seq,
      rate: 100,
      time,
      samples: { A: [1, 2], B: [3, 4] },
    });
    for (const late of [0, 1e300]) {
      const { status, body } = await upload('odd.json', JSON.stringify([at(0, 5), at(2, late)]));
      expect([status, body.durationS]).toEqual([201, 0.06]);
      const analysis = await engineer<{ gaps: unknown[] }>('GET', `/api/v1/captures/${body.id}/analysis`);
      expect(analysis.body.gaps).toEqual([{ from: 0.02, to: 0.04, lostSamples: 2, estimated: true }]);
    }
  });

  it('of a time that is no instant is kept under the time of its arrival', async () => {
    const { status, body } = await upload('odd.csv', 't,A\n1e15,1\n1000000000000001,2\n');
    expect([status, body.startedAt]).toEqual([201, body.createdAt]);
  });

  it('of CSV takes volts, or codes where told so', async () => {
    const rows = (values: number[]) => `t,A,B\n${values.map((v, i) => `${i / 100},${v},${v}`).join('\n')}\n`;
    const inVolts = await upload('Bench 7.csv', rows([0.5, 1.5, 2.5]));
    expect(inVolts.body).toMatchObject({ title: 'Bench 7', rateHz: 100, durationS: 0.03 });
    expect(await volts(inVolts.body, 'A')).toEqual([0.5, 1.5, 2.5]);
    const inCodes = await upload('codes.csv', rows([10, 1260, 2510]), { codes: '1' });
    expect(await volts(inCodes.body, 'A')).toEqual([0, 1, 2]);
  });

  it('of a SenML pack takes its time of day', async () => {
    const pack = [
      { bn: 'rig:', bt: 1.32e9, bu: 'V', n: 'A', v: 1 },
      { n: 'A', t: 0.01, v: 2 },
      { n: 'A', t: 0.02, v: 3 },
    ];
    const { status, body } = await upload('pack.json', JSON.stringify(pack));
    expect([status, body.startedAt]).toEqual([201, '2011-10-30T18:40:00.000Z']);
    expect(await volts(body, 'A')).toEqual([1, 2, 3]);
  });

  it.each([
    ['an unknown channel', 'a.csv', 't,Q\n0,1\n0.1,2\n', 422],
    ['uneven rows', 'a.csv', 't,A\n0,1\n0.1,2\n0.5,3\n', 422],
    ['a name that lies', 'a.wav', 't,A\n0,1\n0.1,2\n', 422],
    ['a WAV cut short', 'a.wav', Buffer.from('RIFF\x00\x00\x00\x00WAVEdata\x10\x00\x00\x00', 'latin1'), 400],
    ['CBOR cut short', 'a.cbor', Uint8Array.of(0x81, 0xa3, 0x66), 400],
    ['JSON of no block', 'a.json', '[{"stream":"x"}]', 422],
    ['nothing', 'a.csv', '', 422],
  ])('refuses %s and keeps nothing of it', async (_what, name, content, status) => {
    const count = async () =>
      (await engineer<{ items: unknown[] }>('GET', '/api/v1/captures')).body.items.length;
    const before = await count();
    const answer = await upload(name, content);
    expect(answer.status).toBe(status);
    expect(answer.body.type).toMatch(/^urn:turnmark:problem:/);
    expect(await count()).toBe(before);
  });

  it('needs a rig, a file and a form', async () => {
    expect((await upload('a.csv', 't,A\n0,1\n0.1,2\n', { rigId: 'none' })).status).toBe(422);
    expect((await engineer('POST', '/api/v1/captures', {})).status).toBe(415);
  });
});
