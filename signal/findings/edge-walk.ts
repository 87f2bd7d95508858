/**
 * The edges of a ring's channels in order of time, read back from the logs of their teeth: for what happens seldom, so
 * that the way from samples to motion need not watch for it.
 */
import type { ChannelPath } from '@/signal/channel-path';
import { createDirectionTracker, forgetLevels, stepTo, stepTogether } from '@/signal/direction-tracker';
import type { DirectionTracker } from '@/signal/direction-tracker';
import type { StepTable } from '@/signal/step-table';
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

/** Nearer to each other than this, the order of two edges is not known, samples. */
const together = 0.25;

export class EdgeWalk {
  /** When the band switched, s. */
  atS = NaN;
  lane = 0;
  rising = false;
  /** As `stepTo` gives it. */
  step = 0;
  /** What cannot be came with this edge. */
  isIllegal = false;
  readonly tracker: DirectionTracker;
  private readonly logs: ToothLog[];
  private readonly sampleS: number;
  /** Twice the tooth, and one more for its fall; one a lane. */
  private readonly next: number[];

  constructor(
    { paths, lanes, rateHz }: { paths: readonly ChannelPath[]; lanes: readonly number[]; rateHz: number },
    table: StepTable,
  ) {
    this.logs = lanes.map((index) => paths[index]!.log);
    this.tracker = createDirectionTracker(table);
    this.sampleS = 1 / rateHz;
    this.next = lanes.map(() => 0);
  }

  /** The next edges are those after `fromS`; a level is known from the tooth before. */
  start(fromS: number): void {
    const { tracker, logs, next } = this;
    forgetLevels(tracker);
    this.atS = -Infinity;
    this.lane = -1;
    for (let lane = 0; lane < logs.length; lane++) {
      const log = logs[lane]!;
      const oldest = readableFrom(log, 0);
      let tooth = log.count;
      while (tooth > oldest && log.riseS[(tooth - 1) & log.mask]! > fromS) tooth--;
      const isFallLeft = tooth > oldest && !(log.fallS[(tooth - 1) & log.mask]! <= fromS);
      if (tooth > oldest) tracker.levels[lane] = isFallLeft ? 1 : 0;
      next[lane] = isFallLeft ? 2 * tooth - 1 : 2 * tooth;
    }
  }

  /** @returns false where there is no further edge yet. */
  advance(): boolean {
    const { tracker, logs } = this;
    let earliest = Infinity;
    let lane = 0;
    for (let m = 0; m < logs.length; m++) {
      const at = this.instantOf(m);
      if (at >= earliest) continue;
      earliest = at;
      lane = m;
    }
    if (earliest === Infinity) return false;
    const isTogether = lane !== this.lane && earliest - this.atS < together * this.sampleS;
    this.lane = lane;
    this.atS = tracker.t = earliest;
    this.rising = (this.next[lane]! & 1) === 0;
    this.next[lane]!++;
    const before = tracker.illegalSteps;
    this.step = isTogether ? stepTogether(tracker, lane, this.rising) : stepTo(tracker, lane, this.rising);
    this.isIllegal = tracker.illegalSteps > before;
    return true;
  }

  private instantOf(lane: number): number {
    const log = this.logs[lane]!;
    let next = this.next[lane]!;
    // A tooth that lost samples cut short has no fall.
    if ((next & 1) === 1 && (next >> 1) + 1 < log.count && Number.isNaN(log.fallS[(next >> 1) & log.mask]!))
      this.next[lane] = ++next;
    const tooth = next >> 1;
    if (tooth >= log.count) return Infinity;
    const i = tooth & log.mask;
    const at = (next & 1) === 0 ? log.riseS[i]! + log.riseWayS[i]! : log.fallS[i]! + log.fallWayS[i]!;
    return Number.isNaN(at) ? Infinity : at;
  }
}

/** Levels of the lanes in their order, as "101". */
export function stateWord(state: number, weights: readonly number[]): string {
  return weights.map((weight) => (state & weight ? '1' : '0')).join('');
}
