/**
 * Pulses that wait for the next ones to tell what they are, and how a stretch between two teeth reads: which of them stands
 * near a place of a tooth, and which is none.
 */
import { isAlike } from '@/signal/wheel-pitches';

export const mostWaiting = 12;
/** How far in order one pulse a place may be off, and any other pulse from a place, in pitches. */
const offInOrder = 0.45;
const offPlace = 0.25;

export class WaitingPulses {
  count = 0;
  readonly t = new Float64Array(mostWaiting);
  readonly swingV = new Float64Array(mostWaiting);
  /** Of the last reading: places after the tooth before the stretch; 0 for a pulse that is no tooth. */
  readonly place = new Int32Array(mostWaiting);

  keepLast(count: number): void {
    const from = this.count - count;
    this.t.copyWithin(0, from, this.count);
    this.swingV.copyWithin(0, from, this.count);
    this.count = count;
  }

  /** From pulse `i - 1` to `i`, s; the last one counts from 0: `intervalS(0)` is the newest. */
  intervalS(back: number): number {
    const i = this.count - 1 - back;
    return this.t[i]! - this.t[i - 1]!;
  }

  /** The last three intervals are alike. */
  get isSteady(): boolean {
    if (this.count < 4) return false;
    const a = this.intervalS(0);
    const b = this.intervalS(1);
    const c = this.intervalS(2);
    return isAlike(a, b) && isAlike(b, c) && isAlike(a, c);
  }

  /** The first `end` pulses and the tooth after them come ever faster, or ever slower: teeth of a shaft that does. */
  isRamp(fromS: number, end: number): boolean {
    const { t } = this;
    let before = t[0]! - fromS;
    let faster = 0;
    for (let i = 1; i <= end; i++) {
      const here = t[i]! - t[i - 1]!;
      if (here > 0.5 * before && here < before) faster++;
      else if (here < 2 * before && here > before) faster--;
      before = here;
    }
    return end > 1 && Math.abs(faster) === end;
  }

  /**
   * Reads the first `end` pulses as standing between a tooth at `fromS` and the one that is pulse `end`, `spans` pitches of
   * `each` s apart, and writes their places.
   * @returns how many of them are no teeth.
   */
  read(fromS: number, end: number, spans: number, each: number): number {
    const { t, place } = this;
    const inOrder = end === spans - 1 && this.isInOrder(fromS, end, each);
    let done = 0;
    let extra = 0;
    for (let i = 0; i < end; i++) {
      // From whichever end of the stretch it fits better: the tooth at the other one may stand off itself.
      const ahead = (t[i]! - fromS) / each;
      const back = spans - (t[end]! - t[i]!) / each;
      const pitches = offWhole(back) < offWhole(ahead) ? back : ahead;
      const here = inOrder ? i + 1 : Math.round(pitches);
      const fits = inOrder || (here > done && here < spans && offWhole(pitches) <= offPlace);
      place[i] = fits ? here : 0;
      if (fits) done = here;
      else extra++;
    }
    return extra;
  }

  private isInOrder(fromS: number, end: number, each: number): boolean {
    for (let i = 0; i < end; i++)
      if (!(Math.abs((this.t[i]! - fromS) / each - (i + 1)) < offInOrder)) return false;
    return true;
  }
}

function offWhole(value: number): number {
  return Math.abs(value - Math.round(value));
}
