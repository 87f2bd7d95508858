/** Twenty rigs of two channels at 20 kS/s for a minute: nothing lost, acks in time, memory flat. */
import { setTimeout as sleep } from 'node:timers/promises';
import type { Probe } from '@/tests/bench/child';
import { runLoad } from '@/tests/bench/hub';
import { startHub } from '@/tests/bench/hub-under-test';
import { heading, line, median } from '@/tests/bench/rounds';

const channels = ['A', 'B'];

export async function benchSoak(seconds: number): Promise<void> {
  const hub = await startHub();
  try {
    const rigs = await hub.makeRigs(20, channels);
    const probes: Probe[] = [];
    let isOver = false;
    const watching = (async () => {
      while (!isOver) {
        probes.push(await hub.process.probe());
        await sleep(1000);
      }
    })();
    const load = await runLoad({
      channels,
      rateHz: 20_000,
      blockSamples: 512,
      url: `${hub.origin.replace('http', 'ws')}/ingest/v1/stream`,
      keys: rigs.map(({ key }) => key),
      seconds,
      pace: 'real-time',
      hasAcks: true,
    });
    isOver = true;
    await watching;
    const states = await Promise.all(rigs.map(({ rigId }) => hub.live(rigId)));
    const lossy = states.filter((state) => state.findings.some(({ code }) => code === 'lost-samples')).length;
    const third = Math.floor(probes.length / 3);
    const memory = (part: Probe[]) => median(part.map((probe) => probe.rssMb)).toFixed(0);
    heading(`Soak: 20 rigs of 2 channels at 20 kS/s for ${seconds} s`);
    line('blocks sent', String(load.blocks));
    line('unacked, problems, closed', `${load.unacked}, ${load.problems}, ${load.closed}`, 'none');
    line('rigs with lost samples', String(lossy), 'none');
    line(
      'ack p50, p99, longest',
      `${[load.ackMs.p50, load.ackMs.p99, load.ackMs.max].map((ms) => ms.toFixed(0)).join(', ')} ms`,
      'p99 within 250',
    );
    line(
      'resident memory: first, last third',
      `${memory(probes.slice(0, third))}, ${memory(probes.slice(-third))} MB`,
      'flat',
    );
    line(
      'longest block of the event loop',
      `${Math.max(...probes.slice(3).map((p) => p.worstBlockMs)).toFixed(1)} ms`,
    );
    line('load generator late by at most', `${load.lateMs.toFixed(0)} ms`);
  } finally {
    await hub.stop();
  }
}
