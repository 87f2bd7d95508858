/**
 * The teeth of the first channel (A or U), one after another: how many positions each interval spans, where on the wheel
 * each tooth stands, and the speed that follows.
 *
 * A tooth is the mid crossing on a rising edge. Numbers that come with every tooth are read from the queue: passed to a
 * function that is not inlined, they would be boxed.
 */
import { createEdgeQueue, delayGuessed, roomForSpeed } from '@/signal/columns';
import type { EdgeQueue } from '@/signal/columns';
import { judgeInterval, judgeWaiting } from '@/signal/gap-judge';
import { createGapSync, moveOn, resetSync } from '@/signal/gap-sync';
import type { GapSync } from '@/signal/gap-sync';
import { createIntervalMeter, noteInterval } from '@/signal/interval-meter';
import type { RigSetup, Settings } from '@/signal/model';
import type { SpeedColumns } from '@/signal/pipeline-types';
import { Pitch } from '@/signal/pitch';
import type { PitchStatus } from '@/signal/pitch';
import { PlainJudge } from '@/signal/plain-judge';
import { SpeedMeter } from '@/signal/speed-meter';
import { stepTable } from '@/signal/step-table';
import { ToothPlacer } from '@/signal/tooth-placer';
import { Unevenness } from '@/signal/unevenness';
import { mostPositions, WheelFaceMeter } from '@/signal/wheel-face-meter';

export class ToothTrain {
  readonly sync: GapSync;
  readonly face: WheelFaceMeter | null;
  readonly intervals = createIntervalMeter();
  readonly uneven: Unevenness;
  /** Signed by `sign`; NaN where not known. */
  rpm = NaN;
  errorRpm = NaN;
  /** -1 while the shaft turns in reverse. */
  sign: 1 | -1 = 1;
  /** Missing positions of the wheel that were passed. */
  extraPositions = 0;
  /** Raw axis, s, delay taken off; NaN before any tooth, and after a gap. */
  lastRiseS = NaN;
  /** The last whole interval, s; NaN where the tooth before is not known. */
  periodS = NaN;
  /** Last tooth of an unbroken row, s. */
  rowS = NaN;
  private readonly rig: RigSetup;
  readonly placer: ToothPlacer;
  private readonly meter: SpeedMeter;
  private readonly teeth: Pitch;
  /** Of a wheel without a gap and without other channels, which would tell. */
  private readonly plain: PlainJudge | null;
  private readonly speed: SpeedColumns;
  private queue: EdgeQueue = createEdgeQueue();
  private entry = 0;
  private firstGuessed = false;
  private firstMidS = NaN;
  /** A tooth whose interval waits for the next one to be judged, s; NaN: none. */
  private waitingT = NaN;
  private waitingSigmaS = NaN;
  private place = 0;
  private troughV = NaN;
  private placedT = NaN;

  /** @param missing positions in a row that the wheel lacks. */
  constructor(rig: RigSetup, missing: number, { speed: { method, windowS } }: Settings, speed: SpeedColumns) {
    const { pulsesPerTurn, missingPulses, gearRatio } = rig.wheel;
    this.rig = rig;
    this.speed = speed;
    this.meter = new SpeedMeter(method, windowS, pulsesPerTurn, gearRatio);
    this.sync = createGapSync(pulsesPerTurn, missing);
    this.face = pulsesPerTurn <= mostPositions ? new WheelFaceMeter(pulsesPerTurn, missingPulses) : null;
    this.placer = new ToothPlacer(this.sync, this.face, missingPulses);
    this.uneven = new Unevenness(pulsesPerTurn);
    this.teeth = new Pitch(this.meter, this.placer.tracker, this.face);
    this.plain = missing === 0 && !stepTable(rig.sensing) ? new PlainJudge(this.sync) : null;
  }

  /** What is learnt of the wheel's own spacing. */
  get pitch(): PitchStatus {
    return this.teeth.status;
  }

  /** Synchronous with the wheel's gap; a plain wheel needs none. */
  get synced(): boolean {
    return this.sync.missing === 0 || this.sync.state === 'synced';
  }

  /** Of the last tooth, where the wheel is in sync. */
  get lastPosition(): number {
    return this.placer.lastPosition();
  }

  /** Stop, gap or reversal: nothing is known of where teeth stand, and no interval reaches across. */
  forget(): void {
    this.meter.reset();
    resetSync(this.sync);
    this.waitingT = NaN;
    this.placedT = NaN;
    this.rowS = NaN;
    this.periodS = NaN;
    this.uneven.reset();
    this.placer.reset();
    this.teeth.lose();
    this.plain?.reset();
  }

  /** The interval that the next tooth closes is not a whole cycle: no speed reaches across it. */
  breakSpeed(): void {
    this.meter.reset();
  }

  get isCounting(): boolean {
    return this.meter.count > 0;
  }

  /** The falling edge at entry `i` of the queue ends the tooth at hand. */
  fall(queue: EdgeQueue, i: number): void {
    this.placer.swingV = queue.extremeV[i]! - this.troughV;
    this.meter.t = queue.midS[i]! - queue.delayS[i]!;
    this.meter.fall();
  }

  /**
   * The rising edge at entry `i` of the queue: a tooth.
   * @returns true where a speed was found from it.
   */
  rise(queue: EdgeQueue, i: number): boolean {
    const { meter, placer } = this;
    this.queue = queue;
    this.entry = i;
    const t = queue.midS[i]! - queue.delayS[i]!;
    const guessed = (queue.flags[i]! & delayGuessed) !== 0;
    if (meter.count === 1 && this.firstGuessed && !guessed) {
      this.lastRiseS = this.firstMidS - queue.delayS[i]!;
      meter.retimeFirst(this.lastRiseS);
    }
    let found = false;
    placer.t = t;
    placer.rise(this.sign < 0);
    meter.t = t;
    meter.sigmaS = queue.sigmaS[i]!;
    if (meter.count === 0) {
      this.firstGuessed = guessed;
      this.firstMidS = queue.midS[i]!;
      this.teeth.begin();
      meter.add(this.place);
    } else {
      this.sync.intervalS = t - this.lastRiseS;
      if (Number.isNaN(this.waitingT)) this.teeth.follow(this.sign < 0);
      else if (this.resumeWaiting()) found = true;
      const spans = this.plain ? this.plain.judge() : judgeInterval(this.sync);
      if (spans > 0) {
        if (this.advance(spans)) found = true;
      } else {
        this.waitingT = t;
        this.waitingSigmaS = queue.sigmaS[i]!;
      }
    }
    if (!Number.isNaN(this.rowS)) {
      this.periodS = t - this.rowS;
      noteInterval(this.intervals, this.periodS, t, this.sync.missing);
    }
    this.rowS = t;
    this.lastRiseS = t;
    this.troughV = queue.extremeV[i]!;
    placer.swingV = NaN;
    return found;
  }

  /** The tooth whose interval waited is placed, now that the entry at hand closes the next one. */
  private resumeWaiting(): boolean {
    const { meter, queue, entry } = this;
    const spans = this.plain ? this.plain.judgeWaiting() : judgeWaiting(this.sync);
    const t = this.waitingT;
    this.waitingT = NaN;
    if (spans === 0) {
      // A pulse, and counted as one, but no tooth of the wheel.
      if (!this.plain) this.extraPositions--;
      return false;
    }
    meter.t = t;
    meter.sigmaS = this.waitingSigmaS;
    const found = this.advance(spans);
    meter.t = queue.midS[entry]! - queue.delayS[entry]!;
    meter.sigmaS = queue.sigmaS[entry]!;
    return found;
  }

  /** The tooth that the meter is set to stands `spans` positions after the one before. */
  private advance(spans: number): boolean {
    const { meter, speed } = this;
    this.place += spans;
    if (this.sync.missing > 0) this.extraPositions += moveOn(this.sync, spans);
    if (!Number.isNaN(this.rpm)) {
      const { pulsesPerTurn, gearRatio } = this.rig.wheel;
      const pitches = (meter.t - this.placedT) * Math.abs(this.rpm) * pulsesPerTurn * gearRatio;
      this.uneven.notePitch(pitches / (60 * spans));
    }
    this.placedT = meter.t;
    this.teeth.mark(this.place, spans);
    if (!meter.add(this.place)) return false;
    const rpm = this.sign * meter.latest.rpm;
    this.rpm = rpm;
    this.errorRpm = meter.latest.errorRpm;
    const i = roomForSpeed(speed);
    speed.t[i] = meter.t;
    speed.rpm[i] = rpm;
    speed.errorRpm[i] = meter.latest.errorRpm;
    return true;
  }
}
