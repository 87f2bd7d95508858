/**
 * The running count of a wheel's positions: its pitch, where it stands on the wheel, and each tooth to its seat.
 *
 * On a wheel with a gap, position 0 is known once two gaps came exactly a turn apart. It does not need the speed's own
 * synchronisation, which an extra pulse or a tooth that is missing beside the gap may hinder.
 */
import type { ExtraPulses } from '@/signal/wheel-extras';
import { WheelGaps } from '@/signal/wheel-gaps';

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

export class WheelCount {
  /** The pulse at hand, s, and its peak to peak, V. */
  t = NaN;
  swingV = NaN;
  isReversed = false;
  isLocked = false;
  /** Positions passed since the count began; its last tooth. */
  count = 0;
  /** Time for one position, s. */
  pitchS = NaN;
  readonly gaps: WheelGaps;
  readonly positions: number;
  readonly missing: number;
  protected readonly extras: ExtraPulses;
  protected lastT = NaN;
  /** Of the last eight teeth or so, s. */
  protected meanPitchS = NaN;
  private readonly seatOf: WheelSeat | null;
  /** Count modulo the positions, and where position 0 is in it; -1: not known. */
  private relative = 0;
  private zero = -1;
  /** Positions since the last tooth that was seated. */
  private owed = 0;

  constructor(positions: number, missing: number, seat: WheelSeat | null, extras: ExtraPulses) {
    this.positions = positions;
    this.missing = missing;
    this.seatOf = seat;
    this.extras = extras;
    this.gaps = new WheelGaps(positions, missing);
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

  /** The pulse at hand is the first tooth of a new count. */
  protected beginCount(pitchS: number): void {
    this.isLocked = true;
    this.count = this.relative = this.owed = 0;
    this.lastT = this.t;
    this.pitchS = this.meanPitchS = pitchS;
    if (this.missing > 0) return;
    this.zero = 0;
    this.seatOf?.start(this.isReversed);
    this.seatAt(0, 1);
  }

  /** The pulse at hand is a tooth, `spans` positions after the one before. */
  protected seat(spans: number): void {
    const { t, positions, missing } = this;
    const each = (t - this.lastT) / spans;
    this.pitchS += (each - this.pitchS) / 2;
    this.meanPitchS += (each - this.meanPitchS) / 8;
    this.lastT = t;
    this.count += spans;
    const relative = this.relative + spans;
    this.relative = relative < positions ? relative : relative % positions;
    if (this.zero < 0) return;
    const { position } = this;
    this.owed += spans;
    if (missing > 0 && position >= positions - missing) {
      this.gaps.isFilled = true;
      this.extras.note(this.count, t);
      return;
    }
    this.seatAt(position, this.owed);
  }

  /** The last tooth is the first one after the gap. */
  protected anchor(): void {
    // Where a gap was known elsewhere, what came in it were teeth.
    if (this.zero >= 0) this.loseSeats();
    this.zero = this.relative;
    this.seatOf?.start(this.isReversed);
    this.seatAt(0, 1);
  }

  protected lose(): void {
    if (this.isLocked) this.loseSeats();
    this.isLocked = false;
    this.zero = -1;
    this.gaps.clear();
    this.pitchS = NaN;
  }

  private seatAt(position: number, spans: number): void {
    const { seatOf } = this;
    this.owed = 0;
    if (!seatOf) return;
    seatOf.t = this.t;
    seatOf.toothSwingV = this.swingV;
    seatOf.place(position, spans);
  }

  private loseSeats(): void {
    this.seatOf?.lose();
    this.extras.lose();
  }
}
