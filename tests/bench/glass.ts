/** From the POST of a block to the frame that shows it, in a headless browser; beside it the shortest way there is. */
import { existsSync } from 'node:fs';
import http from 'node:http';
import { setTimeout as sleep } from 'node:timers/promises';
import { chromium, type Browser } from '@playwright/test';
import { startProbed } from '@/tests/bench/child';
import { blockTemplate, fill, type LoadShape } from '@/tests/bench/fast-block';
import { startHub } from '@/tests/bench/hub-under-test';
import { heading, line, quantile } from '@/tests/bench/rounds';

const browserPath = '/usr/bin/chromium';
const shape: LoadShape = { channels: ['A', 'B'], rateHz: 20_000, blockSamples: 500 };
const warmUpS = 3;

type Arrival = { rigId: string; streamS: number; atMs: number };
type Sent = { rigId: string; endS: number; atMs: number };
type PageState = { arrivals: Arrival[]; isReady: boolean };

export async function benchGlass(seconds: number): Promise<void> {
  if (!existsSync(browserPath)) {
    heading('Ingest to glass: not measured, there is no chromium');
    return;
  }
  const hub = await startHub();
  const browser = await chromium.launch({
    executablePath: browserPath,
    args: ['--no-sandbox', '--disable-gpu', '--disable-background-networking', '--no-first-run'],
  });
  const relay = await startProbed(['--import', 'tsx', 'tests/bench/bare-relay.ts'], {}, (said) =>
    /listening \d/.test(said),
  );
  try {
    const rigs = await hub.makeRigs(3, shape.channels);
    const relayOrigin = `http://127.0.0.1:${/listening (\d+)/.exec(relay.output())?.[1] ?? ''}`;
    const rigIds = rigs.map(({ rigId }) => rigId);
    const control = await measure(browser, relayOrigin, '', rigs, seconds, []);
    const ours = await measure(browser, hub.origin, '/live/v1', rigs, seconds, [
      { type: 'hello', accessToken: hub.accessToken },
      {
        type: 'watch',
        rigs: rigIds.map((rigId) => ({ rigId, ribbon: { teeth: 6, columns: 390, anchor: 'edge' } })),
      },
    ]);
    heading(`Ingest to glass: 3 rigs of 2 channels at 20 kS/s, blocks of 25 ms by POST, ${seconds} s`);
    line('bare relay: p50, p99', figures(control));
    line('hub: p50, p99', figures(ours), 'p99 under 150 ms');
    line('blocks measured: relay, hub', `${control.length}, ${ours.length}`);
    line('blocks never shown: relay, hub', `${unseen(control)}, ${unseen(ours)}`, 'none');
  } finally {
    await browser.close();
    await relay.stop();
    await hub.stop();
  }
}

function unseen(latencies: number[]): number {
  return latencies.filter((latency) => !Number.isFinite(latency)).length;
}

function figures(all: number[]): string {
  const latencies = all.filter(Number.isFinite);
  return `${quantile(latencies, 0.5).toFixed(0)}, ${quantile(latencies, 0.99).toFixed(0)} ms`;
}

/** Milliseconds from each block's POST to the first frame at or after its end. */
async function measure(
  browser: Browser,
  origin: string,
  socketPath: string,
  rigs: { rigId: string; key: string }[],
  seconds: number,
  greetings: object[],
): Promise<number[]> {
  const page = await browser.newPage();
  await page.goto(`${origin}/healthz`);
  await page.evaluate(viewerScript(`${origin.replace('http', 'ws')}${socketPath}`, greetings));
  await page.waitForFunction(() => (window as unknown as { bench: PageState }).bench.isReady);
  const sent = (await Promise.all(rigs.map((rig) => postBlocks(origin, rig, seconds + warmUpS)))).flat();
  await sleep(1000);
  const arrivals = await page.evaluate(() => (window as unknown as { bench: PageState }).bench.arrivals);
  await page.close();
  return sent.filter(({ endS }) => endS > warmUpS).map((block) => latencyOf(block, arrivals));
}

/**
 * What the page runs, as text, since a compiled function leans on helpers that the page does not have. The first
 * message goes when the line opens, the next once the hub has answered with `welcome`.
 */
function viewerScript(url: string, messages: object[]): string {
  return `
    const state = (window.bench = { arrivals: [], isReady: false });
    const messages = ${JSON.stringify(messages)};
    const socket = new WebSocket(${JSON.stringify(url)});
    function sayNext() {
      if (messages.length > 0) socket.send(JSON.stringify(messages.shift()));
      state.isReady = messages.length === 0;
    }
    socket.onopen = sayNext;
    socket.onmessage = (event) => {
      const atMs = Date.now();
      const frame = JSON.parse(event.data);
      if (frame.type === 'welcome') sayNext();
      const streamS = frame.live ? frame.live.streamS : frame.streamS;
      if (frame.rigId && typeof streamS === 'number') state.arrivals.push({ rigId: frame.rigId, streamS, atMs });
    };
    0;
  `;
}

/** Infinity where no frame ever showed the block. */
function latencyOf(block: Sent, arrivals: Arrival[]): number {
  const half = 0.5 / shape.rateHz;
  const seen = arrivals.find(
    (arrival) =>
      arrival.rigId === block.rigId && arrival.atMs >= block.atMs && arrival.streamS >= block.endS - half,
  );
  return seen ? seen.atMs - block.atMs : Infinity;
}

async function postBlocks(
  origin: string,
  rig: { rigId: string; key: string },
  seconds: number,
): Promise<Sent[]> {
  // An answer comes after the commit, so a few posts are under way at once, as from a board that does not wait.
  const agent = new http.Agent({ keepAlive: true, maxSockets: 4 });
  const template = blockTemplate(shape, `glass-${Date.now()}-${rig.rigId}`.slice(0, 64), 1);
  const blockS = shape.blockSamples / shape.rateHz;
  const beginMs = performance.now();
  const sent: Sent[] = [];
  const answered: Promise<void>[] = [];
  for (let seq = 0; (seq + 1) * blockS <= seconds; seq += 1) {
    const waitMs = beginMs + seq * blockS * 1000 - performance.now();
    if (waitMs > 0) await sleep(waitMs);
    const endS = (seq + 1) * blockS;
    sent.push({ rigId: rig.rigId, endS, atMs: Date.now() });
    const headers = {
      'Content-Type': 'application/cbor',
      Authorization: `Bearer ${rig.key}`,
      'X-Rig': rig.rigId,
      'X-End': String(endS),
    };
    answered.push(post(agent, `${origin}/ingest/v1/samples`, headers, fill(template, seq, seq * blockS)));
    if (seq === 0) await answered[0];
  }
  await Promise.all(answered);
  return sent;
}

function post(agent: http.Agent, url: string, headers: Record<string, string>, body: Buffer): Promise<void> {
  return new Promise((resolve) => {
    const request = http.request(url, {
      method: 'POST',
      agent,
      headers: { ...headers, 'Content-Length': body.length },
    });
    request.on('response', (response) => {
      response.on('data', (part: Buffer) => {
        if (response.statusCode !== 202) process.stderr.write(`${response.statusCode} ${part.toString()}\n`);
      });
      response.on('end', resolve);
    });
    request.on('error', (error) => {
      process.stderr.write(`${error.message}\n`);
      resolve();
    });
    request.end(body);
  });
}
