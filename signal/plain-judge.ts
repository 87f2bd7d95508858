/**
 * How many positions of a plain wheel an interval spans, for the speed: a tooth that did not show must not halve it, a pulse
 * that is none must not double it.
 *
 * An interval that is longer or shorter than the two before it, which agree, waits for the next one. A long one is so many
 * whole pitches where the next is as before. A short one makes one pitch with its neighbour, the next or the one before,
 * where the pulse between them is no tooth. Else it is taken as it is: a shaft may speed up from rest by 2.4 from tooth to
 * tooth, and what waited is only late.
 */
import type { GapSync } from '@/signal/gap-sync';

/** Below this many positions a silent tooth cannot be told from a change of speed. */
const fewestPositions = 6;
/** A pulse so soon after a tooth is none on a wheel of any size: no shaft turns four times as fast for one tooth. */
const impossible = 0.25;
const soonest = 0.85;
const latest = 1.5;
const agreeWithin = 1.4;
const offWhole = 0.25;
const offBoth = 0.25;
const offOne = 0.1;
const mostSilent = 3;

/** Works on the interval, the one that waits and the time for one position of `sync`, whose gap is none. */
export class PlainJudge {
  private readonly sync: GapSync;
  private readonly tellsTeeth: boolean;
  /** The interval before the last one accepted, s. */
  private earlierS = NaN;

  constructor(sync: GapSync) {
    this.sync = sync;
    this.tellsTeeth = sync.positions >= fewestPositions;
  }

  reset(): void {
    this.earlierS = NaN;
  }

  /** @returns positions that `sync.intervalS` spans, or 0 where that must wait for the next one. */
  judge(): number {
    const { intervalS, perPositionS: beforeS } = this.sync;
    const ratio = intervalS / beforeS;
    const isOdd = this.tellsTeeth ? ratio < soonest || ratio > latest : ratio < impossible;
    if (isOdd && alike(beforeS, this.earlierS)) {
      this.sync.waitingS = intervalS;
      return 0;
    }
    this.earlierS = beforeS;
    this.sync.perPositionS = intervalS;
    return 1;
  }

  /**
   * Judges the interval that waited, now that the next one, `sync.intervalS`, is known.
   * @returns positions that it spans; 0 where the pulse that ended it was no tooth, and `sync.intervalS` is now both together;
   * -1 where the pulse that began it was none, and the one that ended it is the tooth in its place.
   */
  judgeWaiting(): number {
    const { sync, earlierS } = this;
    const { waitingS, intervalS: nextS, perPositionS: beforeS } = sync;
    sync.waitingS = NaN;
    let spans = 1;
    if (waitingS < beforeS) {
      const off = Math.abs(beforeS + waitingS - earlierS);
      const isBetter = off < offOne * earlierS && off < Math.abs(beforeS - earlierS);
      if (isBetter && Math.abs(nextS / earlierS - 1) < offBoth) {
        sync.perPositionS = beforeS + waitingS;
        return -1;
      }
      // One more pitch of a shaft that goes on speeding up, or slowing down, as it did.
      const nextPitchS = (beforeS * beforeS) / earlierS;
      if (Math.abs((waitingS + nextS) / nextPitchS - 1) < offBoth) {
        sync.intervalS = waitingS + nextS;
        return 0;
      }
    } else if (alike(beforeS, nextS)) {
      const pitches = waitingS / Math.sqrt(beforeS * nextS);
      const whole = Math.round(pitches);
      if (whole <= 1 + mostSilent && Math.abs(pitches - whole) < offWhole) spans = whole;
    }
    this.earlierS = beforeS;
    sync.perPositionS = waitingS / spans;
    return spans;
  }
}

function alike(a: number, b: number): boolean {
  return a < agreeWithin * b && b < agreeWithin * a;
}
