/**
 * How close to each other the edges of a ring's channels come: a cheap look at every edge, so that what happens seldom is
 * read back only where there is something to read.
 */
import type { ChannelPath } from '@/signal/channel-path';
import type { ToothLog } from '@/signal/tooth-log';

export class LaneGaps {
  /** Between two neighbouring edges of different channels since the last scan, s. */
  leastS = Infinity;
  /** A channel made two edges with none of another one between them: a step and the way back. */
  hasRepeat = false;
  /** The last edge that was seen, s. */
  lastS = -Infinity;
  private lastLane = -1;
  private readonly logs: ToothLog[];
  /** The next edge of each lane, twice the tooth and one more for its fall, and its instant; Infinity: not there yet. */
  private readonly next: Float64Array;
  private readonly heads: Float64Array;

  constructor({ paths, lanes }: { paths: readonly ChannelPath[]; lanes: readonly number[] }) {
    this.logs = lanes.map((index) => paths[index]!.log);
    this.next = new Float64Array(lanes.length);
    this.heads = new Float64Array(lanes.length);
  }

  /** All edges that have come since the last one, in order of time. */
  scan(): void {
    const { heads } = this;
    let { lastS, lastLane } = this;
    let leastS = Infinity;
    this.hasRepeat = false;
    for (let lane = 0; lane < heads.length; lane++) this.find(lane);
    for (;;) {
      let lane = 0;
      for (let m = 1; m < heads.length; m++) if (heads[m]! < heads[lane]!) lane = m;
      const at = heads[lane]!;
      if (at === Infinity) break;
      if (lane === lastLane) this.hasRepeat = true;
      else if (at - lastS < leastS) leastS = at - lastS;
      lastS = at;
      lastLane = lane;
      this.next[lane] = this.next[lane]! + 1;
      this.find(lane);
    }
    this.leastS = leastS;
    this.lastS = lastS;
    this.lastLane = lastLane;
  }

  /** What came before the lost samples is past. */
  forget(toS: number): void {
    for (let lane = 0; lane < this.logs.length; lane++) this.next[lane] = 2 * this.logs[lane]!.count;
    this.lastLane = -1;
    this.lastS = toS;
  }

  private find(lane: number): void {
    const log = this.logs[lane]!;
    const tooth = Math.floor(this.next[lane]! / 2);
    if (tooth >= log.count) {
      this.heads[lane] = Infinity;
      return;
    }
    const i = tooth & log.mask;
    if (this.next[lane]! % 2 === 0) {
      this.heads[lane] = log.riseS[i]! + log.riseWayS[i]!;
      return;
    }
    const fallS = log.fallS[i]! + log.fallWayS[i]!;
    if (fallS === fallS) {
      this.heads[lane] = fallS;
    } else if (tooth + 1 < log.count) {
      // A tooth that lost samples cut short has no fall.
      this.next[lane] = this.next[lane]! + 1;
      this.find(lane);
    } else {
      this.heads[lane] = Infinity;
    }
  }
}
