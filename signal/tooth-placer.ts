/**
 * Where on the wheel a tooth stands. Each pulse is held until the next one comes, which tells its swing.
 *
 * Numbers that come with every tooth are fields for the caller to write: passed to a function, they would be boxed.
 */
import type { GapSync } from '@/signal/gap-sync';
import { ExtraPulses } from '@/signal/wheel-extras';
import type { WheelFaceMeter } from '@/signal/wheel-face-meter';
import { WheelTracker } from '@/signal/wheel-tracker';

export class ToothPlacer {
  /** Instant of the pulse that `rise` is to take, s. */
  t = NaN;
  /** Peak to peak of the pulse before it, V; NaN: not known. */
  swingV = NaN;
  readonly tracker: WheelTracker;
  readonly extras: ExtraPulses;
  private readonly sync: GapSync;
  private readonly face: WheelFaceMeter | null;
  private heldT = NaN;

  /** @param missing positions in a row that the wheel lacks. */
  constructor(sync: GapSync, face: WheelFaceMeter | null, missing: number) {
    this.sync = sync;
    this.face = face;
    this.extras = new ExtraPulses(sync.positions);
    this.tracker = new WheelTracker(sync.positions, missing, face, this.extras);
  }

  /** Stop, gap or reversal: nothing is known of where teeth stand. */
  reset(): void {
    this.heldT = NaN;
    this.tracker.reset();
  }

  /** A pulse at `t`: the one before it goes to its place on the wheel. */
  rise(reversed: boolean): void {
    const { tracker, heldT } = this;
    this.heldT = this.t;
    if (Number.isNaN(heldT)) return;
    tracker.isReversed = reversed;
    tracker.t = heldT;
    tracker.swingV = this.swingV;
    tracker.take();
  }

  /**
   * The place that comes next stayed empty in the turn before, or one did and where the wheel stands is in doubt: a weak
   * tooth proves nothing by its silence.
   */
  nextIsOftenMissed(): boolean {
    const { face, sync } = this;
    if (face === null || face.absence.suspects === 0) return false;
    const position = sync.missing === 0 || sync.isProven ? this.lastPosition() : -1;
    return position < 0 || face.absence.inRow[(position + 1) % sync.positions]! > 0;
  }

  /** Of the last pulse, counted the way in which the wheel turns, where the wheel is in sync; -1: not known. */
  lastPosition(): number {
    const { sync, tracker } = this;
    if (sync.missing > 0) return sync.position;
    if (tracker.position < 0) return -1;
    const next = tracker.position + tracker.waiting + 1;
    const { positions, missing } = tracker;
    return (next < positions - missing ? next : next + missing) % positions;
  }
}
