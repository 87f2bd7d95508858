/**
 * How fast the shaft turned at both ends of a stretch, against its mean speed: an edge that is off by a share of its pitch
 * is late by the more the slower the shaft turned, as it does when it starts.
 */
import type { SpeedRing } from '@/signal/speed-ring';

/** Within so much of each other, speeds count as the same. */
const alike = 0.1;

export class EndPaces {
  /** Sum of the squares of the mean speed over that at either end; 2 on a steady shaft. */
  sum = 2;
  /** Mean of 1 and the square of the speed at the end over that at the beginning. */
  growth = 1;
  /** Time for one position in the last interval, s. */
  lastS = NaN;
  private readonly ring: SpeedRing;

  constructor(ring: SpeedRing) {
    this.ring = ring;
  }

  /** Takes the newest tooth, which ends an interval. */
  follow(): void {
    const { times, marks, mask, next } = this.ring;
    const b = (next - 1) & mask;
    const a = (next - 2) & mask;
    this.lastS = (times[b]! - times[a]!) / (marks[b]! - marks[a]!);
  }

  /** From the entry `from` to the newest, at `perPositionS` in the mean. */
  measure(from: number, perPositionS: number): void {
    const { ring, lastS } = this;
    const last = ring.next - 1;
    this.sum = 2;
    this.growth = 1;
    if (last - ring.first < 2) return;
    const before = this.pace(last - 2, last);
    if (Math.abs(before * lastS - 1) < alike && Math.abs(perPositionS / lastS - 1) < alike) return;
    // By straight lines through the middles of intervals, not below a quarter of an interval's own speed.
    let begin: number;
    if (from > ring.first) begin = this.pace(from - 1, from + 1);
    else {
      const here = this.pace(from, from + 1);
      begin = Math.max(here / 4, 2 * here - this.pace(from, from + 2));
    }
    const end = Math.max(1 / (4 * lastS), 2 / lastS - before);
    this.sum = (1 / (begin * begin) + 1 / (end * end)) / (perPositionS * perPositionS);
    this.growth = (1 + (end * end) / (begin * begin)) / 2;
  }

  /** Positions a second from one entry to another. */
  private pace(from: number, to: number): number {
    const { times, marks, mask } = this.ring;
    return (marks[to & mask]! - marks[from & mask]!) / (times[to & mask]! - times[from & mask]!);
  }
}
