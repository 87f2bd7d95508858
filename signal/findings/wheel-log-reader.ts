/** Follows the teeth of one channel through its log. */
import type { ChannelPath } from '@/signal/channel-path';
import type { Numbering } from '@/signal/findings/wheel-look';
import { readableFrom } from '@/signal/tooth-log';
import { WheelAbsence } from '@/signal/wheel-absence';
import type { WheelSeat } from '@/signal/wheel-count';
import { ExtraPulses } from '@/signal/wheel-extras';
import { mirrored } from '@/signal/wheel-face-meter';
import { WheelTracker } from '@/signal/wheel-tracker';

export type WheelLane = {
  path: ChannelPath;
  tracker: WheelTracker;
  extras: ExtraPulses;
  absence: WheelAbsence;
  /** Teeth that came at each position since the numbers hold. */
  counts: Float64Array;
  /** Position on the wheel of what was counted as `position`, and what such numbers count from. */
  numberOf(position: number): number;
  readonly numbering: Numbering;
};

export class WheelLogReader implements WheelLane, WheelSeat {
  readonly path: ChannelPath;
  readonly tracker: WheelTracker;
  readonly extras: ExtraPulses;
  readonly absence: WheelAbsence;
  readonly counts: Float64Array;
  t = NaN;
  toothSwingV = NaN;
  private isReversed = false;
  private next = 0;
  private lastPosition = 0;
  private lastT = NaN;

  constructor(path: ChannelPath, positions: number, missing: number) {
    this.path = path;
    this.extras = new ExtraPulses(positions);
    this.tracker = new WheelTracker(positions, missing, this, this.extras);
    this.absence = new WheelAbsence(positions);
    this.counts = new Float64Array(positions);
  }

  numberOf(position: number): number {
    const { positions, missing } = this.tracker;
    return this.isReversed ? mirrored(position, positions, missing) : position;
  }

  get numbering(): Numbering {
    return this.tracker.missing > 0 && this.tracker.position >= 0 ? 'from the gap' : 'relative';
  }

  read(isStopped: boolean, isReversed: boolean): void {
    const { tracker } = this;
    const { log } = this.path;
    if (isStopped || isReversed !== tracker.isReversed) {
      tracker.reset();
      tracker.isReversed = isReversed;
    }
    const from = readableFrom(log, this.next);
    if (from !== this.next) tracker.reset();
    // The last tooth may not have ended.
    const to = log.count - 1;
    const { riseS, peakV, troughV, mask } = log;
    for (let n = from; n < to; n++) {
      const i = n & mask;
      tracker.t = riseS[i]!;
      tracker.swingV = peakV[i]! - troughV[i]!;
      tracker.take();
    }
    this.next = Math.max(from, to);
  }

  start(reversed: boolean): void {
    this.isReversed = reversed;
    this.counts.fill(0);
    this.lastT = NaN;
  }

  lose(): void {
    this.absence.clear();
  }

  place(position: number, spans: number): void {
    const { positions, missing } = this.tracker;
    for (let k = 1; k < spans && !Number.isNaN(this.lastT); k++) {
      const empty = (this.lastPosition + k) % positions;
      const dueS = this.lastT + (k / spans) * (this.t - this.lastT);
      if (empty < positions - missing) this.absence.stayedEmpty(empty, dueS);
    }
    this.absence.came(position);
    this.counts[position] = this.counts[position]! + 1;
    this.lastPosition = position;
    this.lastT = this.t;
  }
}
