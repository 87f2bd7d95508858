/**
 * The last whole turn: from a tooth to the same tooth a turn later, so that what is uneven about the wheel cancels exactly.
 *
 * Beside it stands the turn between the falling edges of the tooth before, which ended a little earlier: it is brought
 * forward by the change of turns over the last half one. Of both the mean: what shifts the middle level (drift, slow hum)
 * moves rising and falling edges against each other and cancels, noise is smaller by sqrt(2).
 */
import type { SpeedRing } from '@/signal/speed-ring';
import { TurnScatter } from '@/signal/turn-scatter';

/** With fewer positions bringing it forward adds as much noise as the falling edges save. */
const fewestForFalls = 4;
/** Where the speed changes by more in a turn, the change over the last half is too old to bring anything forward. */
const mostChange = 0.05;

export class WholeTurn {
  /** First entry not more than a turn before the newest. */
  from = 0;
  /** Its duration, s; NaN where there is none. */
  turnS = NaN;
  /** What its variance is in variances of one edge. */
  edges = 2;
  /** When it ended, s: the mean of both edges where both are in it. */
  endS = NaN;
  readonly scatter: TurnScatter;
  private readonly ring: SpeedRing;
  private readonly positions: number;
  private readonly half: number;

  constructor(ring: SpeedRing, positions: number) {
    this.ring = ring;
    this.positions = positions;
    this.half = positions >> 1;
    this.scatter = new TurnScatter(positions);
  }

  restart(): void {
    this.from = this.ring.first;
    this.turnS = NaN;
    this.scatter.loosen();
  }

  /** Follows the ring's newest entry. @param withFalls falling edges have a say. */
  follow(withFalls: boolean): void {
    const { ring, positions, scatter } = this;
    const { times, places, turns, mask } = ring;
    const last = ring.next - 1;
    const b = last & mask;
    const turnAgo = places[b]! - positions;
    while (this.from < last - 1 && places[this.from & mask]! < turnAgo) this.from++;
    const a = this.from & mask;
    if (places[a]! !== turnAgo || this.from === last) {
      this.turnS = NaN;
      scatter.interrupt();
      return;
    }
    this.turnS = turns[b] = times[b]! - times[a]!;
    this.edges = 2;
    this.endS = times[b]!;
    if (withFalls && positions >= fewestForFalls) this.joinFalls();
  }

  private joinFalls(): void {
    const { ring, positions, half } = this;
    const { times, places, falls, turns, mask } = ring;
    const last = ring.next - 1;
    if (this.from - 1 < ring.first || last - half <= this.from) return;
    const b = last & mask;
    const before = (last - 1) & mask;
    const beforeA = (this.from - 1) & mask;
    const earlier = (last - half) & mask;
    if (places[before]! - places[beforeA]! !== positions) return;
    const sinceFall =
      ((times[b]! - falls[before]!) * (places[b]! - places[before]!)) / (times[b]! - times[before]!);
    const change = (turns[b]! - turns[earlier]!) / (places[b]! - places[earlier]!);
    if (!(Math.abs(change) * positions < mostChange * turns[b]!)) return;
    const both = (turns[b]! + falls[before]! - falls[beforeA]! + sinceFall * change) / 2;
    // A turn between falling edges that differs much is no turn of the same teeth.
    if (!(Math.abs(both / turns[b]! - 1) < 0.25 / positions)) return;
    this.turnS = both;
    this.edges = 1;
    this.endS = (times[b]! + falls[before]!) / 2;
  }
}
