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
import { SpeedMeter } from '@/signal/speed-meter';
import { illegalStep, stepTable } from '@/signal/step-table';
import { mostPositions, WheelFaceMeter } from '@/signal/wheel-face-meter';

export class Motion {
  readonly sync: GapSync;
  readonly face: WheelFaceMeter | null;
  readonly tracker: DirectionTracker | null;
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
  /** Circular mean of how far A leads B. */
  private phaseCos = 0;
  private phaseSin = 0;

  readonly rig: RigSetup;
  /** The entry that is being taken. */
  private queue: EdgeQueue = createEdgeQueue();
  private entry = 0;
  private readonly toothMissed: () => void;
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
  private swingV = NaN;
  /** The last tooth, until the next tells its swing and confirms how many positions it stands after the one before. */
  private held = false;
  private heldT = NaN;
  private heldSpans = 1;
  private heldPosition = 0;
  /** Plain wheel: position of the last tooth placed, counted since the count began. */
  private relative = -1;
  private heldIntervalS = NaN;
  private intervalBeforeS = NaN;
  private lastARise = NaN;
  private aPeriodS = NaN;
  private lastStepS = NaN;
  /** Largest share of a cycle that one state of the ring took lately. */
  private widestState = NaN;
  readonly intervals = createIntervalMeter();
  private widestPitch = 1;
  private placedT = NaN;

  constructor(
    rig: RigSetup,
    settings: Settings,
    rateHz: number,
    startIndex: number,
    speed: SpeedColumns,
    directions: DirectionChange[],
    toothMissed: () => void,
  ) {
    this.toothMissed = toothMissed;
    const { pulsesPerTurn, missingPulses, gearRatio } = rig.wheel;
    const table = stepTable(rig.sensing);
    this.rig = rig;
    this.stoppedAfterS = settings.speed.stoppedAfterS;
    this.stoppedAfterSamples = settings.speed.stoppedAfterS * rateHz;
    this.meter = new SpeedMeter(settings.speed.method, settings.speed.windowS, pulsesPerTurn, gearRatio);
    this.tracker = table ? createDirectionTracker(table) : null;
    this.sync = createGapSync(pulsesPerTurn, table ? 0 : missingPulses);
    this.face = pulsesPerTurn <= mostPositions ? new WheelFaceMeter(pulsesPerTurn, missingPulses) : null;
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
    if (this.phaseCos === 0 && this.phaseSin === 0) return NaN;
    return (Math.atan2(this.phaseSin, this.phaseCos) * 180) / Math.PI;
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
      else this.swingV = queue.extremeV[i]! - this.troughV;
    } else if (role === 1 && rising) {
      this.learnPhase(t);
    }
  }

  /** Largest number of positions that can still be silent after the last edge. */
  silentPositions(): number {
    if (this.tracker) {
      const even = 1 / this.tracker.table.stepsPerCycle;
      return Number.isNaN(this.widestState) ? 2 * even : Math.min(1, Math.max(even, 1.1 * this.widestState));
    }
    const places = noGapAhead(this.sync) ? 1 : this.sync.missing + 1;
    return (places + (this.nextIsOftenMissed() ? 1 : 0)) * Math.max(1, this.widestPitch);
  }

  /** The place that comes next stayed empty in the turn before: a weak tooth proves nothing by its silence. */
  private nextIsOftenMissed(): boolean {
    const { face, sync } = this;
    if (!face || !this.synced) return false;
    const here = sync.missing > 0 ? sync.position : this.relative + 1;
    return face.missedInRow[(here + 1) % sync.positions]! > 0;
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
    const position = this.sync.missing > 0 ? this.sync.position : this.relative + 1;
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
    if (step !== 0 && this.state === 'running') {
      const share = (t - this.lastStepS) / this.aPeriodS;
      if (share > 0 && share < 1)
        this.widestState = Math.max(share, Number.isNaN(this.widestState) ? 0 : this.widestState * 0.99);
    }
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
    const { meter, queue, entry } = this;
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
    if (this.held) this.showHeld();
    meter.t = t;
    meter.sigmaS = queue.sigmaS[entry]!;
    if (meter.count === 0) {
      this.hold(1);
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
    this.swingV = NaN;
  }

  /** The tooth whose interval waited is placed, now that the entry at hand closes the next one. */
  private resumeWaiting(): void {
    const { meter, queue, entry } = this;
    const spans = judgeWaiting(this.sync);
    meter.t = this.waitingT;
    meter.sigmaS = this.waitingSigmaS;
    this.waitingT = NaN;
    this.advance(spans);
    this.showHeld();
    meter.t = queue.midS[entry]! - queue.delayS[entry]!;
    meter.sigmaS = queue.sigmaS[entry]!;
  }

  /** The tooth that the meter is set to stands `spans` positions after the one before. */
  private advance(spans: number): void {
    const { meter, speed } = this;
    this.place += spans;
    if (this.sync.missing > 0) this.extraPositions += moveOn(this.sync, spans);
    this.hold(spans);
    if (this.state === 'running') this.learnPitch(meter.t, spans);
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

  /** How much longer than the mean the longest pitch of the last turns took: uneven teeth and a swaying shaft. */
  private learnPitch(t: number, spans: number): void {
    const { pulsesPerTurn, gearRatio } = this.rig.wheel;
    const ratio = ((t - this.placedT) * Math.abs(this.rpm) * pulsesPerTurn * gearRatio) / (60 * spans);
    const fading = 1 + (this.widestPitch - 1) * (1 - 1 / (2 * pulsesPerTurn));
    if (ratio < 1.5) this.widestPitch = Math.max(ratio, fading);
  }

  private hold(spans: number): void {
    this.held = true;
    this.heldT = this.meter.t;
    this.heldSpans = spans;
    this.heldPosition = this.sync.position;
  }

  /** Places the held tooth on the wheel face, now that the next one has come. */
  private showHeld(): void {
    const { face, sync, queue, entry } = this;
    this.held = false;
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
    const nextIntervalS = queue.midS[entry]! - queue.delayS[entry]! - this.heldT;
    const long = this.heldIntervalS > 1.5 * nextIntervalS;
    const spans = long ? emptyPlaces(this.intervalBeforeS, this.heldIntervalS, nextIntervalS) + 1 : 1;
    this.intervalBeforeS = this.heldIntervalS / spans;
    this.heldIntervalS = nextIntervalS;
    if (spans > 1) this.toothMissed();
    this.relative = (this.relative + spans) % sync.positions;
    face?.place(this.relative, spans);
  }

  private wholeCycle(tracker: DirectionTracker): boolean {
    const before = this.netAtRise;
    this.netAtRise = tracker.netSteps;
    return this.meter.count === 0 || Math.abs(tracker.netSteps - before) === tracker.table.stepsPerCycle;
  }

  private learnPhase(t: number): void {
    if (Number.isNaN(this.aPeriodS) || this.state !== 'running') return;
    const turns = (t - this.lastARise) / this.aPeriodS;
    if (!(turns >= 0 && turns < 1)) return;
    const share = this.phaseCos === 0 && this.phaseSin === 0 ? 1 : 1 / 16;
    this.phaseCos += share * (Math.cos(2 * Math.PI * turns) - this.phaseCos);
    this.phaseSin += share * (Math.sin(2 * Math.PI * turns) - this.phaseSin);
  }

  private forgetTeeth(): void {
    this.meter.reset();
    resetSync(this.sync);
    this.waitingT = NaN;
    this.netAtRise = NaN;
    this.held = false;
    this.heldIntervalS = NaN;
    this.intervalBeforeS = NaN;
    this.relative = -1;
    this.lastStepS = NaN;
    this.widestPitch = 1;
    this.placedT = NaN;
    this.lastARise = NaN;
    this.aPeriodS = NaN;
    this.phaseCos = this.phaseSin = 0;
    this.face?.lose(this.sync.missing === 0);
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
