/**
 * What is known of the shaft (which way, since when, whether it turns at all) and what is said of it: entries of speed and
 * direction where one of them begins to be known or ceases to be.
 */
import { Calm } from '@/signal/calm';
import { pushSpeed } from '@/signal/columns';
import type { SyncLoss } from '@/signal/gap-sync';
import type { Direction, RigSetup, Settings } from '@/signal/model';
import type { DirectionChange, SpeedColumns } from '@/signal/pipeline-types';
import { ringMotion } from '@/signal/ring-motion';
import type { RingMotion } from '@/signal/ring-motion';
import { ToothTrain } from '@/signal/tooth-train';

export class ShaftState {
  readonly rig: RigSetup;
  readonly train: ToothTrain;
  /** Where several channels make a ring of states. */
  readonly ring: RingMotion | null;
  readonly calm = new Calm();
  direction: Direction = 'unknown';
  state: 'running' | 'stopped' | 'unknown' = 'unknown';
  /** Raw axis, s, delay taken off; NaN before any edge. */
  lastEdgeS = NaN;
  /** Since when the shaft has turned one way without a stop or lost samples, s. */
  sameWaySinceS = NaN;
  /** The last direction known since then; 0: none. */
  protected sense: -1 | 0 | 1 = 0;
  private readonly speed: SpeedColumns;
  private readonly directions: DirectionChange[];
  private speedUnknown = false;

  constructor(
    rig: RigSetup,
    settings: Settings,
    rateHz: number,
    fromS: number,
    speed: SpeedColumns,
    directions: DirectionChange[],
  ) {
    this.rig = rig;
    this.ring = ringMotion(rig, rateHz);
    this.train = new ToothTrain(rig, rig.wheel.missingPulses, settings, speed);
    this.speed = speed;
    this.directions = directions;
    this.sameWaySinceS = fromS;
    directions.push({ t: fromS, value: 'unknown' });
    this.openUnknown(fromS);
  }

  /** Positions are counted in the direction of travel; on the wheel itself they then run backwards. */
  get reversed(): boolean {
    return this.direction === 'reverse';
  }

  protected turnTo(value: Direction, t: number): void {
    if (value === this.direction) return;
    this.direction = value;
    this.train.sign = value === 'reverse' ? -1 : 1;
    this.directions.push({ t, value });
  }

  /** The shaft is known to turn this way, as of the last edge. */
  protected face(sense: -1 | 1): void {
    const t = this.lastEdgeS;
    const { train } = this;
    if (sense === -this.sense) {
      this.forgetTeeth('reversed', t);
      this.openUnknown(t);
    } else if (!Number.isNaN(train.rpm)) {
      train.rpm = Math.abs(train.rpm) * sense;
    }
    this.sense = sense;
    this.turnTo(sense > 0 ? 'forward' : 'reverse', t);
  }

  protected stop(t: number): void {
    this.state = 'stopped';
    this.forgetTeeth('stopped', t);
    this.train.rpm = 0;
    this.train.errorRpm = NaN;
    this.speedUnknown = false;
    pushSpeed(this.speed, t, 0, NaN);
    this.turnTo('stopped', t);
  }

  /** The first edge after a stop. */
  protected wake(t: number): void {
    this.state = 'unknown';
    this.sameWaySinceS = t;
    this.ring?.forgetSense();
    this.turnTo('unknown', t);
    this.openUnknown(t);
  }

  protected run(): void {
    this.state = 'running';
    this.speedUnknown = false;
  }

  /** Nothing is known of where teeth stand, and no interval reaches across what happened at `t`. */
  protected forgetTeeth(because: SyncLoss, t: number): void {
    this.train.forget(because);
    this.ring?.forgetCycle();
    this.sense = 0;
    this.sameWaySinceS = t;
  }

  protected openUnknown(t: number): void {
    this.calm.disturb(t);
    this.train.rpm = NaN;
    this.train.errorRpm = NaN;
    if (this.state === 'running') this.state = 'unknown';
    if (this.speedUnknown) return;
    this.speedUnknown = true;
    pushSpeed(this.speed, t, NaN, NaN);
  }
}
