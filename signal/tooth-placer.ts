/**
 * Where on the wheel a tooth stands. Each tooth is held until the next one comes, which tells its swing and confirms how
 * many positions it stands after the one before.
 *
 * Numbers that come with every tooth are fields for the caller to write: passed to a function, they would be boxed.
 */
import type { GapSync } from '@/signal/gap-sync';
import type { WheelFaceMeter } from '@/signal/wheel-face-meter';

export class ToothPlacer {
  /** Instant of the tooth that `hold` is to hold, and of the one that lets `show` show it, s. */
  t = NaN;
  /** Peak to peak of the tooth held, V; NaN: not known. */
  swingV = NaN;
  isHolding = false;
  /** Plain wheel: position of the last tooth placed, counted since the count began. */
  relative = -1;
  private readonly sync: GapSync;
  private readonly face: WheelFaceMeter | null;
  private readonly toothMissed: () => void;
  private heldT = NaN;
  private heldSpans = 1;
  private heldPosition = 0;
  private heldIntervalS = NaN;
  private intervalBeforeS = NaN;

  constructor(sync: GapSync, face: WheelFaceMeter | null, toothMissed: () => void) {
    this.sync = sync;
    this.face = face;
    this.toothMissed = toothMissed;
  }

  /** Stop, gap or reversal: nothing is known of where teeth stand. */
  reset(): void {
    this.isHolding = false;
    this.relative = -1;
    this.heldIntervalS = NaN;
    this.intervalBeforeS = NaN;
    this.face?.lose(this.sync.missing === 0);
  }

  /** The place that comes next stayed empty in the turn before: a weak tooth proves nothing by its silence. */
  nextIsOftenMissed(): boolean {
    const { face, sync } = this;
    return face !== null && face.missedInRow[(this.lastPosition() + 1) % sync.positions]! > 0;
  }

  /** Of the last tooth, where the wheel is in sync. */
  lastPosition(): number {
    return this.sync.missing > 0 ? this.sync.position : this.relative + 1;
  }

  hold(spans: number): void {
    this.isHolding = true;
    this.heldT = this.t;
    this.heldSpans = spans;
    this.heldPosition = this.sync.position;
  }

  /** Places the held tooth on the wheel face, now that the next one has come. */
  show(): void {
    const { face, sync } = this;
    this.isHolding = false;
    if (face) {
      face.t = this.heldT;
      face.toothSwingV = this.swingV;
    }
    if (sync.missing > 0) {
      if (sync.state !== 'synced') {
        face?.lose(false);
        return;
      }
      face?.place(this.heldPosition, this.heldSpans);
      if (this.heldSpans > 1 && this.heldPosition > 0) this.toothMissed();
      return;
    }
    const nextIntervalS = this.t - this.heldT;
    const long = this.heldIntervalS > 1.5 * nextIntervalS;
    const spans = long ? emptyPlaces(this.intervalBeforeS, this.heldIntervalS, nextIntervalS) + 1 : 1;
    this.intervalBeforeS = this.heldIntervalS / spans;
    this.heldIntervalS = nextIntervalS;
    if (spans > 1) this.toothMissed();
    this.relative = (this.relative + spans) % sync.positions;
    face?.place(this.relative, spans);
  }
}

/**
 * Places of a plain wheel that stayed empty in the interval `here`, told by its neighbours: they agree within 40 %, and it
 * is a whole multiple of their mean, within a quarter.
 */
function emptyPlaces(before: number, here: number, after: number): number {
  if (Number.isNaN(before) || Number.isNaN(here)) return 0;
  if (Math.max(before, after) > 1.4 * Math.min(before, after)) return 0;
  const ratio = here / ((before + after) / 2);
  const whole = Math.round(ratio);
  return whole >= 2 && Math.abs(ratio - whole) < 0.25 ? whole - 1 : 0;
}
