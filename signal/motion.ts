/**
 * From the edges of all channels, in order of time, to count, direction and speed.
 *
 * Speed comes from whole cycles: mid crossings on rising edges of the first channel (A or U). Where a ring of states is
 * known, an interval counts only if exactly one cycle was passed in it, so that dither at one edge makes no speed.
 */
import { createEdgeQueue, delayGuessed, pushSpeed, roomForSpeed } from '@/signal/columns';
import type { EdgeQueue } from '@/signal/columns';
import { createDirectionTracker, forgetLevels, forgetSense, stepTo } from '@/signal/direction-tracker';
import { createIntervalMeter, noteInterval } from '@/signal/interval-meter';
import type { DirectionTracker } from '@/signal/direction-tracker';
import { createGapSync, judgeInterval, judgeWaiting, moveOn, noGapAhead, resetSync } from '@/signal/gap-sync';
import type { GapSync } from '@/signal/gap-sync';
import type { Direction, RigSetup, Settings } from '@/signal/model';
import { edgeRising } from '@/signal/pipeline-types';
import type { DirectionChange, SpeedColumns } from '@/signal/pipeline-types';
import { PhaseLead } from '@/signal/phase-lead';
import { SpeedMeter } from '@/signal/speed-meter';
import { illegalStep, stepTable } from '@/signal/step-table';
import { ToothPlacer } from '@/signal/tooth-placer';
import { Unevenness } from '@/signal/unevenness';
import { mostPositions, WheelFaceMeter } from '@/signal/wheel-face-meter';

export class Motion {
  readonly sync: GapSync;
  readonly face: WheelFaceMeter | null;
  readonly tracker: DirectionTracker | null;
  readonly intervals = createIntervalMeter();
  direction: Direction = 'unknown';
  state: 'running' | 'stopped' | 'unknown' = 'unknown';
  pulses = 0;
  extraPositions = 0;
  // Numbers begin as numbers: a field that was ever undefined holds boxed ones for good.
  countsSinceS = NaN;
  /** Signed; NaN where not known. */
  rpm = NaN;
  errorRpm = NaN;
  /** Raw axis, s, delay taken off; NaN before any edge. */
  lastEdgeS = NaN;
  lastRiseS = NaN;

  readonly rig: RigSetup;
  /** The entry that is being taken. */
  private queue: EdgeQueue = createEdgeQueue();
  private entry = 0;
  private readonly stoppedAfterSamples: number;
  private readonly stoppedAfterS: number;
  private readonly meter: SpeedMeter;
  private readonly speed: SpeedColumns;
  private readonly directions: DirectionChange[];
  private stopAt = NaN;
  private quietSinceS = NaN;
  private countsReset = false;
  private speedUnknown = false;
  private netAtRise = NaN;
  private firstGuessed = false;
  private firstMidS = NaN;
  /** A tooth whose interval waits for the next one to be judged, s; NaN: none. */
  private waitingT = NaN;
  private waitingSigmaS = NaN;
  private place = 0;
  private troughV = NaN;
  private lastARise = NaN;
  private aPeriodS = NaN;
  private lastStepS = NaN;
  private placedT = NaN;
  private readonly placer: ToothPlacer;
  private readonly uneven: Unevenness;
  private readonly phase = new PhaseLead();

  constructor(
    rig: RigSetup,
    settings: Settings,
    rateHz: number,
    startIndex: number,
    speed: SpeedColumns,
    directions: DirectionChange[],
    toothMissed: () => void,
  ) {
    const { pulsesPerTurn, missingPulses, gearRatio } = rig.wheel;
    const table = stepTable(rig.sensing);
    this.rig = rig;
    this.stoppedAfterS = settings.speed.stoppedAfterS;
    this.stoppedAfterSamples = settings.speed.stoppedAfterS * rateHz;
    this.meter = new SpeedMeter(settings.speed.method, settings.speed.windowS, pulsesPerTurn, gearRatio);
    this.tracker = table ? createDirectionTracker(table) : null;
    this.sync = createGapSync(pulsesPerTurn, table ? 0 : missingPulses);
    this.face = pulsesPerTurn <= mostPositions ? new WheelFaceMeter(pulsesPerTurn, missingPulses) : null;
    this.placer = new ToothPlacer(this.sync, this.face, toothMissed);
    this.uneven = new Unevenness(pulsesPerTurn);
    this.speed = speed;
    this.directions = directions;
    this.countsSinceS = startIndex / rateHz;
    this.stopAt = startIndex + this.stoppedAfterSamples;
    this.quietSinceS = startIndex / rateHz;
    directions.push({ t: this.countsSinceS, value: 'unknown' });
    this.openUnknown(this.countsSinceS);
  }

  get positions(): number {
    return this.pulses + this.extraPositions;
  }

  /** Synchronous with the wheel's gap; a plain wheel needs none. */
  get synced(): boolean {
    return this.sync.missing === 0 || this.sync.state === 'synced';
  }

  /** Degrees by which A leads B, -180 to 180; NaN where not known. */
  get phaseDeg(): number {
    return this.phase.deg;
  }

  /** Nothing came up to sample `at`: the shaft may have been found stopped on the way. */
  quietUpTo(at: number): void {
    if (this.state === 'stopped' || at <= this.stopAt) return;
    const t = this.quietSinceS + this.stoppedAfterS;
    this.state = 'stopped';
    this.forgetTeeth();
    this.rpm = 0;
    this.errorRpm = NaN;
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
    this.lastRiseS = NaN;
    this.countsReset = true;
  }

  /** Entry `i` of the queue of the channel with the place `role` in the arrangement (0 for A or U), in order of time. */
  take(queue: EdgeQueue, i: number, role: number): void {
    this.queue = queue;
    this.entry = i;
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
      if (rising) this.rise();
      else this.placer.swingV = queue.extremeV[i]! - this.troughV;
    } else if (role === 1 && rising && this.state === 'running') {
      this.phase.learn((t - this.lastARise) / this.aPeriodS);
    }
  }

  /** Largest number of positions that can still be silent after the last edge. */
  silentPositions(): number {
    const { widestState, widestPitch } = this.uneven;
    if (this.tracker) {
      const even = 1 / this.tracker.table.stepsPerCycle;
      return Number.isNaN(widestState) ? 2 * even : Math.min(1, Math.max(even, 1.1 * widestState));
    }
    const places = noGapAhead(this.sync) ? 1 : this.sync.missing + 1;
    const nextIsWeak = this.synced && this.placer.nextIsOftenMissed();
    return (places + (nextIsWeak ? 1 : 0)) * Math.max(1, widestPitch);
  }

  /**
   * Falling bound, rpm, at `nowS`; NaN before any edge.
   * @param latencyS how long after its instant an edge is known: silence is proven only up to `nowS` less that.
   */
  speedAtMostRpm(nowS: number, latencyS: number): number {
    const since = this.tracker ? this.lastEdgeS : this.lastRiseS;
    if (Number.isNaN(this.lastEdgeS)) return NaN;
    const elapsed =
      this.state === 'stopped'
        ? this.stoppedAfterS
        : nowS - latencyS - (Number.isNaN(since) ? this.quietSinceS : Math.max(since, 0));
    return (
      (60 * this.silentPositions()) /
      (this.rig.wheel.pulsesPerTurn * this.rig.wheel.gearRatio * Math.max(elapsed, 0))
    );
  }

  /** Angle of the wheel at `nowS`, degrees; NaN where not known. */
  angleDeg(nowS: number): number {
    if (Number.isNaN(this.lastRiseS) || !this.synced) return NaN;
    const { pulsesPerTurn, gearRatio } = this.rig.wheel;
    const position = this.placer.lastPosition();
    const since = Number.isNaN(this.rpm)
      ? 0
      : (this.rpm / 60) * gearRatio * pulsesPerTurn * (nowS - this.lastRiseS);
    const angle =
      ((this.reversed ? -1 : 1) * (position + Math.min(1, Math.abs(since))) * 360) / pulsesPerTurn;
    return ((angle % 360) + 360) % 360;
  }

  /** Positions are counted in the direction of travel; on the wheel itself they then run backwards. */
  get reversed(): boolean {
    return this.direction === 'reverse';
  }

  private step(tracker: DirectionTracker, role: number, rising: boolean, t: number): void {
    const step = stepTo(tracker, role, rising);
    if (step === illegalStep) {
      this.netAtRise = NaN;
      return;
    }
    this.pulses = tracker.netSteps / tracker.table.stepsPerCycle;
    if (step !== 0 && this.state === 'running') this.uneven.noteState((t - this.lastStepS) / this.aPeriodS);
    this.lastStepS = t;
    if (tracker.sense === 0) return;
    const value: Direction = tracker.sense > 0 ? 'forward' : 'reverse';
    if (value === this.direction) return;
    if (this.direction === 'forward' || this.direction === 'reverse') {
      this.forgetTeeth();
      this.openUnknown(t);
    } else if (!Number.isNaN(this.rpm)) {
      this.rpm = Math.abs(this.rpm) * tracker.sense;
    }
    this.turnTo(value, t);
  }

  /** The entry at hand is a rising edge of the first channel: a tooth. */
  private rise(): void {
    const { meter, placer, queue, entry } = this;
    const t = queue.midS[entry]! - queue.delayS[entry]!;
    const guessed = (queue.flags[entry]! & delayGuessed) !== 0;
    if (this.tracker && !this.wholeCycle(this.tracker)) {
      meter.reset();
      this.openUnknown(t);
    }
    if (meter.count === 1 && this.firstGuessed && !guessed) {
      this.lastRiseS = this.firstMidS - queue.delayS[entry]!;
      meter.retimeFirst(this.lastRiseS);
    }
    if (!this.tracker) this.pulses++;
    placer.t = t;
    if (placer.isHolding) placer.show();
    meter.t = t;
    meter.sigmaS = queue.sigmaS[entry]!;
    if (meter.count === 0) {
      placer.hold(1);
      this.firstGuessed = guessed;
      this.firstMidS = queue.midS[entry]!;
      meter.add(this.place);
    } else {
      this.sync.intervalS = t - this.lastRiseS;
      if (!Number.isNaN(this.waitingT)) this.resumeWaiting();
      const spans = judgeInterval(this.sync);
      if (spans > 0) {
        this.advance(spans);
      } else {
        this.waitingT = t;
        this.waitingSigmaS = queue.sigmaS[entry]!;
      }
    }
    if (!Number.isNaN(this.lastARise)) {
      this.aPeriodS = t - this.lastARise;
      noteInterval(this.intervals, this.aPeriodS, t, this.sync.missing);
    }
    this.lastARise = t;
    this.lastRiseS = t;
    this.troughV = queue.extremeV[entry]!;
    placer.swingV = NaN;
  }

  /** The tooth whose interval waited is placed, now that the entry at hand closes the next one. */
  private resumeWaiting(): void {
    const { meter, placer, queue, entry } = this;
    const spans = judgeWaiting(this.sync);
    placer.t = meter.t = this.waitingT;
    meter.sigmaS = this.waitingSigmaS;
    this.waitingT = NaN;
    this.advance(spans);
    placer.t = meter.t = queue.midS[entry]! - queue.delayS[entry]!;
    placer.show();
    meter.sigmaS = queue.sigmaS[entry]!;
  }

  /** The tooth that the meter is set to stands `spans` positions after the one before. */
  private advance(spans: number): void {
    const { meter, speed } = this;
    this.place += spans;
    if (this.sync.missing > 0) this.extraPositions += moveOn(this.sync, spans);
    this.placer.hold(spans);
    if (this.state === 'running') {
      const { pulsesPerTurn, gearRatio } = this.rig.wheel;
      const pitches = (meter.t - this.placedT) * Math.abs(this.rpm) * pulsesPerTurn * gearRatio;
      this.uneven.notePitch(pitches / (60 * spans));
    }
    this.placedT = meter.t;
    if (!meter.add(this.place)) return;
    const rpm = this.direction === 'reverse' ? -meter.latest.rpm : meter.latest.rpm;
    this.rpm = rpm;
    this.errorRpm = meter.latest.errorRpm;
    this.state = 'running';
    this.speedUnknown = false;
    const i = roomForSpeed(speed);
    speed.t[i] = meter.t;
    speed.rpm[i] = rpm;
    speed.errorRpm[i] = meter.latest.errorRpm;
  }

  private wholeCycle(tracker: DirectionTracker): boolean {
    const before = this.netAtRise;
    this.netAtRise = tracker.netSteps;
    return this.meter.count === 0 || Math.abs(tracker.netSteps - before) === tracker.table.stepsPerCycle;
  }

  private forgetTeeth(): void {
    this.meter.reset();
    resetSync(this.sync);
    this.waitingT = NaN;
    this.netAtRise = NaN;
    this.lastStepS = NaN;
    this.placedT = NaN;
    this.lastARise = NaN;
    this.aPeriodS = NaN;
    this.phase.reset();
    this.uneven.reset();
    this.placer.reset();
  }

  private turnTo(value: Direction, t: number): void {
    if (value === this.direction) return;
    this.direction = value;
    this.directions.push({ t, value });
  }

  private openUnknown(t: number): void {
    this.rpm = NaN;
    this.errorRpm = NaN;
    if (this.state === 'running') this.state = 'unknown';
    if (this.speedUnknown) return;
    this.speedUnknown = true;
    pushSpeed(this.speed, t, NaN, NaN);
  }
}
