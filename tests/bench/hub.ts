/** The whole hub against a bare receiver, saturated; and its event loop at four million samples a second. */
import { runTypeScript, startProbed, type ProbedProcess } from '@/tests/bench/child';
import { startHub } from '@/tests/bench/hub-under-test';
import type { LoadOrder, LoadResult } from '@/tests/bench/load';
import { heading, interleave, line, median, ratios } from '@/tests/bench/rounds';

const channels = ['A', 'B'];
const shape = { channels, rateHz: 20_000, blockSamples: 1024 };

export function runLoad(order: LoadOrder): Promise<LoadResult> {
  return runTypeScript<LoadResult>('tests/bench/load.ts', [], JSON.stringify(order));
}

export async function benchHub(rounds: number): Promise<void> {
  const hub = await startHub();
  const bare = await startProbed(['--import', 'tsx', 'tests/bench/bare-receiver.ts'], {}, (said) =>
    /listening \d/.test(said),
  );
  try {
    const rigs = await hub.makeRigs(50, channels);
    const keys = rigs.map(({ key }) => key);
    const hubUrl = `${hub.origin.replace('http', 'ws')}/ingest/v1/stream`;
    const bareUrl = `ws://127.0.0.1:${/listening (\d+)/.exec(bare.output())?.[1] ?? ''}`;
    await saturated(rounds, hub.process, bare, hubUrl, bareUrl, keys.slice(0, 20));
    await fourMillion(hub.process, hubUrl, keys);
  } finally {
    await bare.stop();
    await hub.stop();
  }
}

type Cost = { nsPerSample: number; megaSamplesPerS: number };

async function saturated(
  rounds: number,
  hub: ProbedProcess,
  bare: ProbedProcess,
  hubUrl: string,
  bareUrl: string,
  keys: string[],
): Promise<void> {
  const seconds = 5;
  const flood = async (target: ProbedProcess, url: string, hasAcks: boolean): Promise<Cost> => {
    const before = await target.probe();
    const load = await runLoad({ ...shape, url, keys, seconds, pace: 'flood', hasAcks });
    const after = await target.probe();
    if (load.unacked > 0 || load.problems > 0 || load.closed > 0) {
      line('not all was taken', `${load.unacked} unacked, ${load.problems} problems, ${load.closed} closed`);
    }
    return {
      nsPerSample: ((after.cpuUs - before.cpuUs) * 1000) / load.samples,
      megaSamplesPerS: load.samples / seconds / 1e6,
    };
  };
  await flood(hub, hubUrl, true);
  await flood(bare, bareUrl, false);
  const found = await interleave<Cost>(rounds, {
    hub: () => flood(hub, hubUrl, true),
    bare: () => flood(bare, bareUrl, false),
  });
  const ns = (costs: Cost[] = []) => costs.map((cost) => cost.nsPerSample);
  heading(
    `Hub, saturated: 20 rigs of 2 channels, 4 KiB messages (${rounds} interleaved rounds, CPU of the process)`,
  );
  line('bare WebSocket receiver', `${median(ns(found.bare)).toFixed(2)} ns/sample`);
  line('hub', `${median(ns(found.hub)).toFixed(2)} ns/sample`);
  line('hub takes', `${median((found.hub ?? []).map((cost) => cost.megaSamplesPerS)).toFixed(1)} MS/s`);
  line('hub / bare', ratios(ns(found.hub), ns(found.bare)), 'at most 5.5');
}

async function fourMillion(hub: ProbedProcess, url: string, keys: string[]): Promise<void> {
  const idle = await startProbed(['--import', 'tsx', 'tests/bench/idle.ts'], {}, (said) =>
    said.includes('idle'),
  );
  const seconds = 25;
  const startS = 5;
  const order: LoadOrder = { ...shape, rateHz: 40_000, url, keys, seconds, pace: 'real-time', hasAcks: true };
  await runLoad({ ...order, seconds: 3 });
  await hub.probe();
  const loading = runLoad(order);
  await new Promise((resolve) => setTimeout(resolve, startS * 1000));
  // Fifty boards that all begin within one instant are a figure of their own.
  const before = await hub.probe();
  await idle.probe();
  const load = await loading;
  const after = await hub.probe();
  const control = await idle.probe();
  await idle.stop();
  heading('Hub at 4 million samples a second: 50 rigs of 2 channels at 40 kS/s');
  line(
    'samples offered, taken',
    `${(load.samples / seconds / 1e6).toFixed(2)} MS/s, ${load.unacked} blocks unacked`,
  );
  line('core share', `${((after.cpuUs - before.cpuUs) / (seconds - startS) / 1e4).toFixed(1)} %`);
  line('longest block of the event loop', `${after.worstBlockMs.toFixed(1)} ms`);
  line(
    'of an idle process beside it',
    `${control.worstBlockMs.toFixed(1)} ms`,
    'aim: hub at most 15 ms more',
  );
  line('longest block while 50 streams begin at once', `${before.worstBlockMs.toFixed(1)} ms`);
  line('ack p50, p99', `${load.ackMs.p50.toFixed(0)}, ${load.ackMs.p99.toFixed(0)} ms`);
}
