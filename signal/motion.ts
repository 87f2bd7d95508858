/**
 * From the edges of all channels, in order of time, to count, direction and speed.
 *
 * Speed comes from whole cycles: mid crossings on rising edges of the first channel (A or U). Where a ring of states is
 * known, an interval counts only if exactly one cycle was passed in it, so that dither at one edge makes no speed.
 */
import { Calm } from '@/signal/calm';
import { pushSpeed } from '@/signal/columns';
import type { EdgeQueue } from '@/signal/columns';
import { createDirectionTracker, forgetLevels, forgetSense, stepTo } from '@/signal/direction-tracker';
import type { DirectionTracker } from '@/signal/direction-tracker';
import type { Direction, RigSetup, Settings } from '@/signal/model';
import { edgeRising } from '@/signal/pipeline-types';
import type { DirectionChange, SpeedColumns } from '@/signal/pipeline-types';
import { PhaseLead } from '@/signal/phase-lead';
import { illegalStep, stepTable } from '@/signal/step-table';
import { ToothTrain } from '@/signal/tooth-train';

export class Motion {
  readonly rig: RigSetup;
  readonly train: ToothTrain;
  readonly tracker: DirectionTracker | null;
  readonly phase = new PhaseLead();
  readonly calm = new Calm();
  readonly stoppedAfterS: number;
  direction: Direction = 'unknown';
  state: 'running' | 'stopped' | 'unknown' = 'unknown';
  pulses = 0;
  // Numbers begin as numbers: a field that was ever undefined holds boxed ones for good.
  countsSinceS = NaN;
  /** Raw axis, s, delay taken off; NaN before any edge. */
  lastEdgeS = NaN;
  quietSinceS = NaN;
  private readonly stoppedAfterSamples: number;
  private readonly speed: SpeedColumns;
  private readonly directions: DirectionChange[];
  private stopAt = NaN;
  private countsReset = false;
  private speedUnknown = false;
  private netAtRise = NaN;
  private lastStepS = NaN;

  constructor(
    rig: RigSetup,
    settings: Settings,
    rateHz: number,
    startIndex: number,
    speed: SpeedColumns,
    directions: DirectionChange[],
  ) {
    const table = stepTable(rig.sensing);
    this.rig = rig;
    this.stoppedAfterS = settings.speed.stoppedAfterS;
    this.stoppedAfterSamples = settings.speed.stoppedAfterS * rateHz;
    this.tracker = table ? createDirectionTracker(table) : null;
    this.train = new ToothTrain(rig, table ? 0 : rig.wheel.missingPulses, settings, speed);
    this.speed = speed;
    this.directions = directions;
    this.countsSinceS = startIndex / rateHz;
    this.stopAt = startIndex + this.stoppedAfterSamples;
    this.quietSinceS = startIndex / rateHz;
    directions.push({ t: this.countsSinceS, value: 'unknown' });
    this.openUnknown(this.countsSinceS);
  }

  get positions(): number {
    return this.pulses + this.train.extraPositions;
  }

  /** Positions are counted in the direction of travel; on the wheel itself they then run backwards. */
  get reversed(): boolean {
    return this.direction === 'reverse';
  }

  /** Nothing came up to sample `at`: the shaft may have been found stopped on the way. */
  quietUpTo(at: number): void {
    if (this.state === 'stopped' || at <= this.stopAt) return;
    const t = this.quietSinceS + this.stoppedAfterS;
    this.state = 'stopped';
    this.forgetTeeth();
    this.train.rpm = 0;
    this.train.errorRpm = NaN;
    this.speedUnknown = false;
    pushSpeed(this.speed, t, 0, NaN);
    this.turnTo('stopped', t);
  }

  /** Samples were lost from `fromS` to `toS`; the next sample is `at`. */
  gap(fromS: number, toS: number, at: number): void {
    this.forgetTeeth();
    if (this.tracker) forgetLevels(this.tracker);
    this.state = 'unknown';
    this.turnTo('unknown', fromS);
    this.openUnknown(fromS);
    this.stopAt = at + this.stoppedAfterSamples;
    this.quietSinceS = toS;
    this.train.lastRiseS = NaN;
    this.countsReset = true;
  }

  /** Entry `i` of the queue of the channel with the place `role` in the arrangement (0 for A or U), in order of time. */
  take(queue: EdgeQueue, i: number, role: number): void {
    const at = queue.at[i]!;
    if (at > this.stopAt) this.quietUpTo(at);
    const t = queue.midS[i]! - queue.delayS[i]!;
    const rising = (queue.flags[i]! & edgeRising) !== 0;
    this.stopAt = at + this.stoppedAfterSamples;
    this.quietSinceS = t;
    this.lastEdgeS = t;
    if (this.countsReset) {
      this.countsReset = false;
      this.countsSinceS = t;
    }
    if (this.state === 'stopped') {
      this.state = 'unknown';
      if (this.tracker) forgetSense(this.tracker);
      this.turnTo('unknown', t);
      this.openUnknown(t);
    }
    if (this.tracker) this.step(this.tracker, role, rising, t);
    if (role === 0) {
      if (rising) this.rise(queue, i, t);
      else this.train.fall(queue, i);
    } else if (role === 1 && rising && this.state === 'running') {
      this.phase.learn((t - this.train.rowS) / this.train.periodS);
    }
  }

  private step(tracker: DirectionTracker, role: number, rising: boolean, t: number): void {
    const step = stepTo(tracker, role, rising);
    if (step === illegalStep) {
      this.netAtRise = NaN;
      return;
    }
    this.pulses = tracker.netSteps / tracker.table.stepsPerCycle;
    const { train } = this;
    if (step !== 0 && this.state === 'running') train.uneven.noteState((t - this.lastStepS) / train.periodS);
    this.lastStepS = t;
    if (tracker.sense === 0) return;
    const value: Direction = tracker.sense > 0 ? 'forward' : 'reverse';
    if (value === this.direction) return;
    if (this.direction === 'forward' || this.direction === 'reverse') {
      this.forgetTeeth();
      this.openUnknown(t);
    } else if (!Number.isNaN(train.rpm)) {
      train.rpm = Math.abs(train.rpm) * tracker.sense;
    }
    this.turnTo(value, t);
  }

  private rise(queue: EdgeQueue, i: number, t: number): void {
    const { train, tracker } = this;
    if (tracker && !this.wholeCycle(tracker)) {
      train.breakSpeed();
      this.openUnknown(t);
    }
    if (!tracker) this.pulses++;
    this.calm.teeth++;
    if (!train.rise(queue, i)) return;
    this.state = 'running';
    this.speedUnknown = false;
  }

  private wholeCycle(tracker: DirectionTracker): boolean {
    const before = this.netAtRise;
    this.netAtRise = tracker.netSteps;
    return !this.train.isCounting || Math.abs(tracker.netSteps - before) === tracker.table.stepsPerCycle;
  }

  private forgetTeeth(): void {
    this.train.forget();
    this.netAtRise = NaN;
    this.lastStepS = NaN;
    this.phase.reset();
  }

  private turnTo(value: Direction, t: number): void {
    if (value === this.direction) return;
    this.direction = value;
    this.train.sign = value === 'reverse' ? -1 : 1;
    this.directions.push({ t, value });
  }

  private openUnknown(t: number): void {
    this.calm.disturb(t);
    this.train.rpm = NaN;
    this.train.errorRpm = NaN;
    if (this.state === 'running') this.state = 'unknown';
    if (this.speedUnknown) return;
    this.speedUnknown = true;
    pushSpeed(this.speed, t, NaN, NaN);
  }
}
