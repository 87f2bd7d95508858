/**
 * How close to each other the edges of a ring's channels come: a cheap look at every edge, so that what happens seldom is
 * read back only where there is something to read.
 */
import type { ChannelPath } from '@/signal/channel-path';
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

const nothing = Float64Array.of(Infinity);

export class LaneGaps {
  /** Between two neighbouring edges of different channels since the last scan, s. */
  leastS = Infinity;
  /** A channel made two edges with none of another one between them: a step and the way back. */
  hasRepeat = false;
  /** The last edge that was seen, s. */
  lastS = -Infinity;
  private lastLane = -1;
  private readonly logs: ToothLog[];
  /** The first tooth of each lane of which not all was seen, and whether its rise was. */
  private readonly tooth: number[];
  private readonly risen: boolean[];
  /** Instants of the new edges of each lane, with Infinity after the last. */
  private readonly instants: Float64Array[];

  constructor({ paths, lanes }: { paths: readonly ChannelPath[]; lanes: readonly number[] }) {
    this.logs = lanes.map((index) => paths[index]!.log);
    this.tooth = lanes.map(() => 0);
    this.risen = lanes.map(() => false);
    this.instants = this.logs.map((log) => new Float64Array(2 * log.length + 1));
  }

  /** All edges that have come since the last one, in order of time. */
  scan(): void {
    const { instants } = this;
    for (let lane = 0; lane < instants.length; lane++) this.collect(lane);
    this.merge(instants[0] ?? nothing, instants[1] ?? nothing, instants[2] ?? nothing);
  }

  /** What came before the lost samples is past. */
  forget(toS: number): void {
    for (let lane = 0; lane < this.logs.length; lane++) {
      this.tooth[lane] = this.logs[lane]!.count;
      this.risen[lane] = false;
    }
    this.lastLane = -1;
    this.lastS = toS;
  }

  /** Three lists in order, each with Infinity at its end. */
  private merge(a: Float64Array, b: Float64Array, c: Float64Array): void {
    let { lastS, lastLane } = this;
    let leastS = Infinity;
    let hasRepeat = false;
    let i = 0;
    let j = 0;
    let k = 0;
    let nextA = a[0]!;
    let nextB = b[0]!;
    let nextC = c[0]!;
    for (;;) {
      let at = nextA;
      let lane = 0;
      if (nextB < at) {
        at = nextB;
        lane = 1;
      }
      if (nextC < at) {
        at = nextC;
        lane = 2;
      }
      if (at === Infinity) break;
      if (lane === 0) nextA = a[++i]!;
      else if (lane === 1) nextB = b[++j]!;
      else nextC = c[++k]!;
      if (lane === lastLane) hasRepeat = true;
      else if (at - lastS < leastS) leastS = at - lastS;
      lastS = at;
      lastLane = lane;
    }
    this.leastS = leastS;
    this.hasRepeat = hasRepeat;
    this.lastS = lastS;
    this.lastLane = lastLane;
  }

  private collect(lane: number): void {
    const { count, mask, riseS, riseWayS, fallS, fallWayS } = this.logs[lane]!;
    const instants = this.instants[lane]!;
    let tooth = this.tooth[lane]!;
    let risen = this.risen[lane]!;
    const first = readableFrom(this.logs[lane]!, tooth);
    if (first > tooth) {
      tooth = first;
      risen = false;
    }
    let n = 0;
    for (; tooth < count; tooth++) {
      const at = tooth & mask;
      if (!risen) instants[n++] = riseS[at]! + riseWayS[at]!;
      risen = true;
      const endS = fallS[at]! + fallWayS[at]!;
      if (endS === endS) instants[n++] = endS;
      // The tooth at hand; an earlier one without a fall was cut short by lost samples.
      else if (tooth === count - 1) break;
      risen = false;
    }
    instants[n] = Infinity;
    this.tooth[lane] = tooth;
    this.risen[lane] = risen;
  }
}
