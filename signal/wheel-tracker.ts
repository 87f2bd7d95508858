/**
 * Which pulse is which tooth of the wheel, from the instants alone.
 *
 * A pulse about one pitch after the tooth before it is the next tooth. Any other waits until two pulses stand a whole
 * pitch apart again: what lies between the last tooth and the first of the two is then a whole number of pitches at the
 * mean of the pitches before and after, each pulse in it that stands near a place is a tooth, places without one stayed
 * empty, and a pulse between places is none. Where that does not add up, the count is lost and begins anew: never a number
 * that has silently slipped.
 */
import { WheelCount } from '@/signal/wheel-count';
import { isAlike, isRegular, mostEmpty, wholePitches } from '@/signal/wheel-pitches';
import { mostWaiting, WaitingPulses } from '@/signal/wheel-waiting';

/** A pulse within these shares of the pitch after the last tooth is the next one without further thought. */
const soonest = 0.85;
const latest = 1.18;
/** Pulses too many and empty places in one stretch are believed only after so many teeth: the pitch is well known then. */
const teethForBoth = 12;

export class WheelTracker extends WheelCount {
  private readonly wait = new WaitingPulses();

  /** Pulses that are not placed yet. */
  get waiting(): number {
    return this.wait.count;
  }

  /** Stop, lost samples or a reversal. */
  reset(): void {
    this.wait.count = 0;
    this.lose();
  }

  /** Takes the pulse at hand. */
  take(): void {
    const { wait } = this;
    if (wait.count === 0 && this.isLocked) {
      const share = (this.t - this.lastT) / this.pitchS;
      if (share > soonest && share < latest) {
        this.seat(1);
        return;
      }
    }
    wait.t[wait.count] = this.t;
    wait.swingV[wait.count] = this.swingV;
    wait.count++;
    if (this.isLocked) this.resolve();
    else this.lock();
  }

  /** The waiting pulse `i` is a tooth, `spans` positions after the one before. */
  private seatWaiting(i: number, spans: number): void {
    this.t = this.wait.t[i]!;
    this.swingV = this.wait.swingV[i]!;
    this.seat(spans);
    if (spans > 1 && this.gaps.note(spans, this.count, this.position)) this.anchor();
  }

  /** The stretch that waits may have come to its end. */
  private resolve(): void {
    const { wait, pitchS, meanPitchS } = this;
    if (wait.count < 2) return;
    const end = wait.count - 2;
    const nextS = wait.intervalS(0);
    const stretchS = wait.t[end]! - this.lastT;
    // The mean of both sides follows a shaft that speeds up or slows down meanwhile; that of the last teeth is better on a
    // wheel that is uneven all round, while the shaft turns steadily.
    for (let attempt = 0; attempt < (isAlike(pitchS, meanPitchS) ? 2 : 1); attempt++) {
      const beforeS = attempt === 0 ? pitchS : meanPitchS;
      if (!isRegular(nextS, beforeS)) continue;
      const each = attempt === 0 ? (beforeS + nextS) / 2 : beforeS;
      const spans = wholePitches(stretchS / each, this.missing + 2 * end, attempt === 1);
      if (spans > 0 && this.settle(end, spans, each)) return;
    }
    if (wait.count === mostWaiting || this.isAnotherSpeed()) this.loseCount();
  }

  /** The pulses that wait come steadily, and not at every second or third tooth. */
  private isAnotherSpeed(): boolean {
    const { wait, pitchS } = this;
    if (!wait.isSteady) return false;
    for (let i = 0; i < wait.count; i++) {
      const pitches = (wait.t[i]! - (i === 0 ? this.lastT : wait.t[i - 1]!)) / pitchS;
      if (wholePitches(pitches, this.missing, false) < 2) return true;
    }
    return false;
  }

  /**
   * `end` pulses and then a tooth wait, `spans` pitches after the last tooth; after it comes one more pulse.
   * @returns false where that reading is too odd to be believed.
   */
  private settle(end: number, spans: number, each: number): boolean {
    const { wait, lastT: fromS, count: fromCount } = this;
    const extra = wait.read(fromS, end, spans, each);
    if (!this.isCredible(end, spans, extra)) return false;
    let done = 0;
    for (let i = 0; i <= end; i++) {
      const place = i === end ? spans : wait.place[i]!;
      if (place === 0) {
        this.extras.note(fromCount + (wait.t[i]! - fromS) / each, wait.t[i]!);
        continue;
      }
      this.seatWaiting(i, place - done);
      done = place;
    }
    this.pitchS = each;
    this.t = wait.t[end + 1]!;
    this.swingV = wait.swingV[end + 1]!;
    wait.count = 0;
    this.take();
    return true;
  }

  /** Several pulses too many, or one beside empty places: only where all is well known, and in a short stretch. */
  private isCredible(end: number, spans: number, extra: number): boolean {
    const { wait, pitchS, missing } = this;
    const empty = spans - 1 - (end - extra);
    if (empty > missing + mostEmpty) return false;
    if (extra === 0 || (extra === 1 && empty === 0)) return true;
    if (!isAlike(wait.intervalS(0), pitchS) || spans > missing + mostEmpty) return false;
    if (wait.isRamp(this.lastT, end)) return false;
    return empty === 0 || (extra === 1 && this.count >= teethForBoth);
  }

  private loseCount(): void {
    this.lose();
    this.wait.keepLast(3);
    this.lock();
  }

  /** Two whole pitches in a row, or two with the wheel's gap between them, begin the count. */
  private lock(): void {
    const { wait, missing } = this;
    if (wait.count < 3) return;
    const last = wait.intervalS(0);
    const middle = wait.intervalS(1);
    if (isRegular(last, middle)) {
      this.begin(3, 1, (last + middle) / 2);
      return;
    }
    if (missing > 0 && wait.count >= 4) {
      const first = wait.intervalS(2);
      const each = (first + last) / 2;
      const isGap = wholePitches(middle / each, missing, false) === missing + 1;
      if (isRegular(last, first) && isGap) {
        this.begin(4, missing + 1, each);
        return;
      }
    }
    if (wait.count === mostWaiting) wait.keepLast(mostWaiting - 1);
  }

  /** The last `teeth` pulses that wait are teeth, `middle` positions between the two before the last. */
  private begin(teeth: number, middle: number, pitchS: number): void {
    const { wait } = this;
    wait.keepLast(teeth);
    wait.count = 0;
    this.t = wait.t[0]!;
    this.swingV = wait.swingV[0]!;
    this.beginCount(pitchS);
    for (let i = 1; i < teeth; i++) this.seatWaiting(i, i === teeth - 2 ? middle : 1);
    this.pitchS = pitchS;
  }
}
