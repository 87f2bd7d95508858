/** Goal e: what silence proves of the speed, once edges have stopped coming. */
import type { Bench } from '@/tests/accuracy/rigs';
import { runBench } from '@/tests/accuracy/run';

export type BoundRun = {
  looks: number;
  /** Looks at which the bound stood below the true speed, or the speed shown above the bound. */
  below: number;
  /** The least ratio of bound to true speed at any look. */
  leastRatio: number;
  /** Looks at which the bound had risen since the look before, with no edge between. */
  rises: number;
  /** The bound at the end over the speed before the stop. */
  endShare: number;
};

const lookSamples = 50;

/**
 * @param fromS looks begin here: the shaft slows, or is slow.
 * @param rpm speed before.
 */
export function runBound(bench: Bench, fromS: number, endS: number, rpm: number): BoundRun {
  const run: BoundRun = { looks: 0, below: 0, leastRatio: Infinity, rises: 0, endShare: NaN };
  let before = Infinity;
  let edgesBefore = 0;
  runBench(bench, endS, lookSamples, (_, nowS, status) => {
    if (nowS < fromS) return;
    const { speedAtMostRpm, speedRpm, channels } = status();
    const edges = channels.reduce((sum, channel) => sum + channel.edges, 0);
    const trueRpm = Math.abs(bench.rig.truth.speedRpmAt(nowS));
    const atMost = speedAtMostRpm ?? Infinity;
    run.looks += 1;
    if (trueRpm > 0) run.leastRatio = Math.min(run.leastRatio, atMost / trueRpm);
    if (atMost < trueRpm || Math.abs(speedRpm ?? 0) > atMost) run.below += 1;
    if (edges === edgesBefore && atMost > before * (1 + 1e-12)) run.rises += 1;
    before = atMost;
    edgesBefore = edges;
    run.endShare = atMost / rpm;
  });
  return run;
}
