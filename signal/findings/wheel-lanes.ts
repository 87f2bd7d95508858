/**
 * The wheel as each channel of the arrangement sees it: which pulse is which tooth, places that stayed empty, pulses too
 * many. The first channel's is the motion's own; the others' teeth are read from their logs at ticks.
 */
import type { ChannelPath } from '@/signal/channel-path';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import type { ToothLog } from '@/signal/tooth-log';
import { readableFrom } from '@/signal/tooth-log';
import { WheelAbsence } from '@/signal/wheel-absence';
import { ExtraPulses } from '@/signal/wheel-extras';
import { mirrored, mostPositions } from '@/signal/wheel-face-meter';
import type { WheelSeat } from '@/signal/wheel-tracker';
import { WheelTracker } from '@/signal/wheel-tracker';

export type WheelLane = {
  path: ChannelPath;
  tracker: WheelTracker;
  extras: ExtraPulses;
  absence: WheelAbsence;
  /** Teeth that came at each position since the numbers hold. */
  counts: Float64Array;
  /** Position on the wheel of what was counted as `position`. */
  numberOf(position: number): number;
};

export class WheelLanes implements FindingRule {
  readonly latches = [];
  /** None on a wheel with so many positions that no single tooth is judged. */
  readonly lanes: readonly WheelLane[];
  private readonly context: RuleContext;
  private readonly readers: LogReader[] = [];
  private readonly missedBefore: number[];
  /** Since when the first channel's teeth have been counted without a break, s; Infinity: they are not. */
  countedSinceS = Infinity;

  constructor(context: RuleContext) {
    const { motion, paths, lanes, rig } = context;
    const { pulsesPerTurn, missingPulses } = rig.wheel;
    const { face, placer } = motion.train;
    this.context = context;
    this.lanes = lanes.flatMap((index, place): WheelLane[] => {
      const path = paths[index];
      if (!path || !face || pulsesPerTurn > mostPositions) return [];
      if (place === 0) {
        const { tracker, extras } = placer;
        const { absence, counts } = face;
        return [{ path, tracker, extras, absence, counts, numberOf: (position) => face.numberOf(position) }];
      }
      const reader = new LogReader(path, pulsesPerTurn, missingPulses);
      this.readers.push(reader);
      return [reader];
    });
    this.missedBefore = this.lanes.map(() => 0);
  }

  tick(nowS: number): void {
    const { motion } = this.context;
    if (!motion.train.placer.tracker.isLocked) this.countedSinceS = Infinity;
    else if (this.countedSinceS === Infinity) this.countedSinceS = nowS;
    for (const reader of this.readers) reader.read(motion.direction === 'stopped', motion.reversed);
    for (let i = 0; i < this.lanes.length; i++) {
      const { tracker, path } = this.lanes[i]!;
      if (tracker.missedTeeth !== this.missedBefore[i]) path.toothMissed();
      this.missedBefore[i] = tracker.missedTeeth;
    }
  }
}

/** Follows one channel's teeth through its log. */
class LogReader implements WheelLane, WheelSeat {
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
    for (let n = from; n < to; n++) this.feed(log, n & log.mask);
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

  private feed(log: ToothLog, i: number): void {
    const { tracker } = this;
    tracker.t = log.riseS[i]!;
    tracker.swingV = log.peakV[i]! - log.troughV[i]!;
    tracker.take();
  }
}
