/**
 * Which pulse is which tooth of the wheel, from the instants alone.
 *
 * A pulse about one pitch after the tooth before it is the next tooth. Any other waits until two pulses stand a whole
 * pitch apart again: what lies between the last tooth and the first of the two is then a whole number of pitches at the
 * mean of the pitches before and after, each pulse in it that stands near a place is a tooth, places without one stayed
 * empty, and a pulse between places is none. Where that does not add up, the count is lost and begins anew: never a number
 * that has silently slipped.
 *
 * On a wheel with a gap, position 0 is known once two gaps came exactly a turn apart. It does not need the speed's own
 * synchronisation, which an extra pulse or a tooth that is missing beside the gap may hinder.
 */
import type { ExtraPulses } from '@/signal/wheel-extras';

/** Who takes the teeth. Numbers that come with every tooth are fields: passed to a function, they would be boxed. */
export interface WheelSeat {
  /** Instant of the tooth that `place` is to take, s, and its peak to peak, V (NaN: not known). */
  t: number;
  toothSwingV: number;
  /** Positions are known from here on, counted the way in which the wheel turns. */
  start(reversed: boolean): void;
  /** A tooth at `position`, `spans` positions after the one before. */
  place(position: number, spans: number): void;
  /** Positions are not known any more. */
  lose(): void;
}

/** A pulse within these shares of the pitch after the last tooth is the next one without further thought. */
const soonest = 0.85;
const latest = 1.18;
/** Two pulses are a pitch apart within these shares of the pitch before. */
const regularFrom = 0.7;
const regularTo = 1.4;
const steadyWithin = 1.25;
/** How far from a whole number of pitches a stretch may be, and a tooth from its place, in pitches. */
const offSingle = 0.35;
const offStretch = 0.25;
const offPerPitch = 0.08;
const offAtMost = 0.45;
const offPlace = 0.25;
/** Longer silence is a shaft that paused: more teeth in a row do not go missing. */
const mostEmpty = 3;
const mostWaiting = 12;
/** Pulses too many and empty places in one stretch are believed only after so many teeth: the pitch is well known then. */
const teethForBoth = 12;

export class WheelTracker {
  /** The pulse that `take` is to take, s, and its peak to peak, V. */
  t = NaN;
  swingV = NaN;
  isReversed = false;
  isLocked = false;
  /** Positions passed since the count began; its last tooth. */
  count = 0;
  /** Time for one position, s. */
  pitchS = NaN;
  waiting = 0;
  /** Times that teeth which should have come did not, since the stream began. */
  missedTeeth = 0;
  /** Stretches of more than one pitch: how many positions the last ones lie apart, and how many times in a row the same. */
  between = 0;
  sameBetween = 0;
  longSpans = 0;
  /** Count at the last of them; -1: none since the count began. */
  longAt = -1;
  readonly positions: number;
  readonly missing: number;
  private readonly seatOf: WheelSeat | null;
  private readonly extras: ExtraPulses;
  private readonly waitT = new Float64Array(mostWaiting);
  private readonly waitSwingV = new Float64Array(mostWaiting);
  private readonly waitPlace = new Int32Array(mostWaiting);
  private lastT = NaN;
  /** Of the last eight teeth or so, s. */
  private meanPitchS = NaN;
  /** Count modulo the positions, and where position 0 is in it; -1: not known. */
  private relative = 0;
  private zero = -1;
  private owed = 0;
  private candidate = -1;
  private gapFilled = false;

  constructor(positions: number, missing: number, seat: WheelSeat | null, extras: ExtraPulses) {
    this.positions = positions;
    this.missing = missing;
    this.seatOf = seat;
    this.extras = extras;
  }

  /** Of the last tooth: fixed to the wheel where that has a gap; -1: not known. */
  get position(): number {
    if (this.zero < 0) return -1;
    const position = this.relative - this.zero;
    return position < 0 ? position + this.positions : position;
  }

  /** Where a place in the running count stands on the wheel, in positions; the count's own place where that is not known. */
  onWheel(place: number): number {
    const { positions, zero } = this;
    return (place - Math.max(0, zero) + positions) % positions;
  }

  /** Stop, lost samples or a reversal. */
  reset(): void {
    this.waiting = 0;
    this.lose();
  }

  /** Takes the pulse `t`. */
  take(): void {
    if (this.waiting === 0 && this.isLocked) {
      const share = (this.t - this.lastT) / this.pitchS;
      if (share > soonest && share < latest) {
        this.seat(1);
        return;
      }
    }
    const { waiting } = this;
    this.waitT[waiting] = this.t;
    this.waitSwingV[waiting] = this.swingV;
    this.waiting = waiting + 1;
    if (this.isLocked) this.resolve();
    else this.lock();
  }

  private seat(spans: number): void {
    const { t, positions, missing, seatOf } = this;
    const each = (t - this.lastT) / spans;
    this.pitchS += (each - this.pitchS) / 2;
    this.meanPitchS += (each - this.meanPitchS) / 8;
    this.lastT = t;
    this.count += spans;
    const relative = this.relative + spans;
    this.relative = relative < positions ? relative : relative % positions;
    if (this.zero < 0) return;
    const { position } = this;
    if (missing > 0 && position >= positions - missing) {
      this.gapFilled = true;
      this.owed += spans;
      this.extras.note(this.count, t);
      return;
    }
    if (seatOf) {
      seatOf.t = t;
      seatOf.toothSwingV = this.swingV;
      seatOf.place(position, this.owed + spans);
    }
    this.owed = 0;
  }

  /** The stretch that waits may have come to its end. */
  private resolve(): void {
    const { waitT, waiting, pitchS } = this;
    if (waiting < 2) return;
    const end = waiting - 2;
    const nextS = waitT[end + 1]! - waitT[end]!;
    const stretchS = waitT[end]! - this.lastT;
    // The mean of both sides follows a shaft that speeds up or slows down meanwhile; that of the last teeth is better on a
    // wheel that is uneven all round, while the shaft turns steadily.
    const { meanPitchS } = this;
    const isSteady = pitchS < steadyWithin * meanPitchS && meanPitchS < steadyWithin * pitchS;
    for (let attempt = 0; attempt < (isSteady ? 2 : 1); attempt++) {
      const beforeS = attempt === 0 ? pitchS : meanPitchS;
      if (nextS < regularFrom * beforeS || nextS > regularTo * beforeS) continue;
      const each = attempt === 0 ? (beforeS + nextS) / 2 : beforeS;
      const spans = this.wholeSpans(stretchS / each, end, attempt === 1 ? offSingle : offStretch);
      if (spans > 0 && this.settle(end, spans, each)) return;
    }
    if (waiting === mostWaiting || (waiting >= 4 && this.isAnotherSpeed())) this.loseCount();
  }

  /**
   * @param between pulses in it. @param off how far from whole it may be where it is more than one pitch.
   * @returns 0 where that is no whole number of pitches, or too many empty ones.
   */
  private wholeSpans(pitches: number, between: number, off: number): number {
    const whole = Math.round(pitches);
    if (whole < 1 || whole > this.missing + 1 + mostEmpty + 2 * between) return 0;
    const most = whole === 1 ? offSingle : Math.min(offAtMost, Math.max(off, offPerPitch * whole));
    return Math.abs(pitches - whole) <= most ? whole : 0;
  }

  /** The last three intervals are alike, and the pulses that wait do not come at every second or third tooth. */
  private isAnotherSpeed(): boolean {
    const { waitT, waiting: n, pitchS } = this;
    const a = waitT[n - 1]! - waitT[n - 2]!;
    const b = waitT[n - 2]! - waitT[n - 3]!;
    const c = waitT[n - 3]! - waitT[n - 4]!;
    if (Math.max(a, b, c) > steadyWithin * Math.min(a, b, c)) return false;
    for (let i = 0; i < n; i++) {
      const pitches = (waitT[i]! - (i === 0 ? this.lastT : waitT[i - 1]!)) / pitchS;
      if (this.wholeSpans(pitches, 0, offStretch) < 2) return true;
    }
    return false;
  }

  /**
   * `end` pulses and then a tooth wait, `spans` pitches after the last tooth; after it comes one more pulse.
   * @returns false where that reading is too odd to be believed.
   */
  private settle(end: number, spans: number, each: number): boolean {
    const { waitT, waitSwingV, lastT: fromT, count: fromCount } = this;
    const nextS = waitT[end + 1]! - waitT[end]!;
    const alike = nextS < steadyWithin * this.pitchS && this.pitchS < steadyWithin * nextS;
    if (!this.readPlaces(end, spans, each, alike)) return false;
    let done = 0;
    for (let i = 0; i <= end; i++) {
      const place = i === end ? spans : this.waitPlace[i]!;
      if (place === 0) {
        this.extras.note(fromCount + (waitT[i]! - fromT) / each, waitT[i]!);
        continue;
      }
      this.t = waitT[i]!;
      this.swingV = waitSwingV[i]!;
      this.seat(place - done);
      if (place - done > 1) this.noteLong(place - done);
      done = place;
    }
    this.pitchS = each;
    this.t = waitT[end + 1]!;
    this.swingV = waitSwingV[end + 1]!;
    this.waiting = 0;
    this.take();
    return true;
  }

  /**
   * Writes the place of each of the `end` pulses that wait, 0 for one that is no tooth.
   * @param alike the pitch is the same on both sides. @returns false where that reading is too odd to be believed.
   */
  private readPlaces(end: number, spans: number, each: number, alike: boolean): boolean {
    const { waitT, waitPlace, lastT } = this;
    let inOrder = end === spans - 1;
    for (let i = 0; i < end && inOrder; i++)
      inOrder = Math.abs((waitT[i]! - lastT) / each - (i + 1)) < offAtMost;
    let done = 0;
    let extra = 0;
    for (let i = 0; i < end; i++) {
      // From whichever end of the stretch it fits better: the tooth at the other one may stand off itself.
      const ahead = (waitT[i]! - lastT) / each;
      const back = spans - (waitT[end]! - waitT[i]!) / each;
      const pitches = offWhole(back) < offWhole(ahead) ? back : ahead;
      const place = inOrder ? i + 1 : Math.round(pitches);
      const fits = inOrder || (place > done && place < spans && Math.abs(pitches - place) <= offPlace);
      waitPlace[i] = fits ? place : 0;
      if (fits) done = place;
      else extra++;
    }
    const empty = spans - 1 - (end - extra);
    if (extra === 0) return true;
    // Several pulses too many, or one beside empty places: only where all is well known, and in a short stretch.
    if (extra === 1 && empty === 0) return true;
    if (!alike || spans > this.missing + mostEmpty || this.isRamp(end)) return false;
    return empty === 0 || (extra === 1 && this.count >= teethForBoth);
  }

  /** Pulses that come ever faster, or ever slower, are teeth of a shaft that does. */
  private isRamp(end: number): boolean {
    const { waitT } = this;
    let before = waitT[0]! - this.lastT;
    let faster = 0;
    for (let i = 1; i <= end; i++) {
      const here = waitT[i]! - waitT[i - 1]!;
      if (here > 0.5 * before && here < before) faster++;
      else if (here < 2 * before && here > before) faster--;
      before = here;
    }
    return end > 1 && Math.abs(faster) === end;
  }

  private noteLong(spans: number): void {
    const { count, positions, missing, zero } = this;
    if (this.longAt >= 0) {
      const between = count - this.longAt;
      const same = between === this.between && spans === this.longSpans;
      this.sameBetween = same ? this.sameBetween + 1 : 1;
      this.between = between;
    }
    this.longSpans = spans;
    this.longAt = count;
    if (missing === 0) {
      this.missedTeeth++;
      return;
    }
    if (zero >= 0) {
      const before = (this.position - spans + 2 * positions) % positions;
      const overGap = before < positions - missing && before + spans >= positions;
      if (!overGap || spans > missing + 1) this.missedTeeth++;
      if (overGap) this.gapFilled = false;
      // A gap elsewhere is teeth that did not show, unless teeth came where the wheel has none.
      if (overGap || spans !== missing + 1 || !this.gapFilled) return;
    } else if (spans <= missing) {
      return;
    }
    if (this.candidate >= 0 && count - this.candidate === positions) this.anchor();
    else if (this.candidate < 0 || count - this.candidate > positions) this.candidate = count;
  }

  /** The last tooth is the first one after the gap. */
  private anchor(): void {
    const { seatOf } = this;
    this.candidate = -1;
    this.gapFilled = false;
    this.owed = 0;
    if (this.zero >= 0) {
      // What came in the gap were teeth.
      seatOf?.lose();
      this.extras.lose();
    }
    this.zero = this.relative;
    if (!seatOf) return;
    seatOf.start(this.isReversed);
    seatOf.t = this.t;
    seatOf.toothSwingV = this.swingV;
    seatOf.place(0, 1);
  }

  private lose(): void {
    if (this.isLocked) {
      this.seatOf?.lose();
      this.extras.lose();
    }
    this.isLocked = false;
    this.zero = this.candidate = this.longAt = -1;
    this.between = this.sameBetween = this.longSpans = 0;
    this.pitchS = NaN;
  }

  private loseCount(): void {
    this.lose();
    this.keepLast(3);
    this.lock();
  }

  private keepLast(count: number): void {
    const from = this.waiting - count;
    this.waitT.copyWithin(0, from, this.waiting);
    this.waitSwingV.copyWithin(0, from, this.waiting);
    this.waiting = count;
  }

  /** Two whole pitches in a row, or two with the wheel's gap between them, begin the count. */
  private lock(): void {
    const { waitT, waiting: n, missing } = this;
    if (n < 3) return;
    const a = waitT[n - 2]! - waitT[n - 3]!;
    const b = waitT[n - 1]! - waitT[n - 2]!;
    if (b > regularFrom * a && b < regularTo * a) {
      this.begin(3, 1, (a + b) / 2);
      return;
    }
    if (missing > 0 && n >= 4) {
      const before = waitT[n - 3]! - waitT[n - 4]!;
      const each = (before + b) / 2;
      const regular = b > regularFrom * before && b < regularTo * before;
      if (regular && this.wholeSpans(a / each, 0, offStretch) === missing + 1) {
        this.begin(4, missing + 1, each);
        return;
      }
    }
    if (n === mostWaiting) this.keepLast(mostWaiting - 1);
  }

  /** The last `teeth` pulses that wait are teeth, `middle` positions between the two before the last. */
  private begin(teeth: number, middle: number, pitchS: number): void {
    const { waitT, waitSwingV, seatOf } = this;
    this.keepLast(teeth);
    this.waiting = 0;
    this.isLocked = true;
    this.gapFilled = false;
    this.count = this.relative = this.owed = 0;
    this.t = this.lastT = waitT[0]!;
    this.swingV = waitSwingV[0]!;
    this.pitchS = this.meanPitchS = pitchS;
    if (this.missing === 0) {
      this.zero = 0;
      if (seatOf) {
        seatOf.start(this.isReversed);
        seatOf.t = this.t;
        seatOf.toothSwingV = this.swingV;
        seatOf.place(0, 1);
      }
    }
    for (let i = 1; i < teeth; i++) {
      const spans = i === teeth - 2 ? middle : 1;
      this.t = waitT[i]!;
      this.swingV = waitSwingV[i]!;
      this.seat(spans);
      if (spans > 1) this.noteLong(spans);
    }
    this.pitchS = pitchS;
  }
}

function offWhole(value: number): number {
  return Math.abs(value - Math.round(value));
}
