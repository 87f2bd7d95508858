/**
 * The teeth of the first channel (A or U), one after another: where on the wheel each stands, and the speed that follows.
 *
 * A tooth is the mid crossing on a rising edge. Numbers that come with every tooth are read from the queue: passed to a
 * function that is not inlined, they would be boxed.
 */
import type { EdgeQueue } from '@/signal/columns';
import { noGapAhead } from '@/signal/gap-proof';
import { createGapSync, resetSync } from '@/signal/gap-sync';
import type { GapSync, SyncLoss } from '@/signal/gap-sync';
import type { RigSetup, Settings } from '@/signal/model';
import type { SpeedColumns } from '@/signal/pipeline-types';
import type { PitchStatus } from '@/signal/pitch';
import { stepTable } from '@/signal/step-table';
import { ToothPlacer } from '@/signal/tooth-placer';
import { ToothSpeed } from '@/signal/tooth-speed';
import { Unevenness } from '@/signal/unevenness';
import { mostPositions, WheelFaceMeter } from '@/signal/wheel-face-meter';

export class ToothTrain {
  readonly sync: GapSync;
  readonly face: WheelFaceMeter | null;
  readonly uneven: Unevenness;
  readonly placer: ToothPlacer;
  /** Signed by `sign`; NaN where not known. */
  rpm = NaN;
  errorRpm = NaN;
  /** -1 while the shaft turns in reverse. */
  sign: 1 | -1 = 1;
  /** Raw axis, s, delay taken off; NaN before any tooth, and after a gap. */
  lastRiseS = NaN;
  /** The last whole interval, s; NaN where the tooth before is not known. */
  periodS = NaN;
  /** Last tooth of an unbroken row, s. */
  rowS = NaN;
  /** Positions that could still be silent when the teeth were last forgotten. */
  silentAtEnd = 1;
  private readonly speed: ToothSpeed;
  /** rpm of the shaft for one turn of the wheel a second. */
  private readonly rpmPerTurns: number;
  private troughV = NaN;

  /** @param missing positions in a row that the wheel lacks. */
  constructor(rig: RigSetup, missing: number, settings: Settings, columns: SpeedColumns) {
    const { pulsesPerTurn, missingPulses, gearRatio } = rig.wheel;
    this.sync = createGapSync(pulsesPerTurn, missing);
    this.face = pulsesPerTurn <= mostPositions ? new WheelFaceMeter(pulsesPerTurn, missingPulses) : null;
    this.placer = new ToothPlacer(this.sync, this.face, missingPulses);
    this.uneven = new Unevenness(pulsesPerTurn, stepTable(rig.sensing)?.stepsPerCycle ?? 1);
    this.rpmPerTurns = 60 / gearRatio;
    const { tracker } = this.placer;
    this.speed = new ToothSpeed(rig, settings, this.sync, this.uneven, tracker, this.face, columns);
  }

  /** What is learnt of the wheel's own spacing. */
  get pitch(): PitchStatus {
    return this.speed.pitch.status;
  }

  /** rpm per second, signed as the speed is; NaN where not known: less than one and a half turns since the last break. */
  get accelerationRpmPerS(): number {
    return this.sign * this.rpmPerTurns * this.speed.meter.acceleration().perS2;
  }

  /** Its standard error. */
  get accelerationErrorRpmPerS(): number {
    return this.rpmPerTurns * this.speed.meter.acceleration().errorPerS2;
  }

  /** Missing positions of the wheel that were passed. */
  get extraPositions(): number {
    return this.speed.extraPositions;
  }

  /** Synchronous with the wheel's gap; a plain wheel needs none. */
  get synced(): boolean {
    return this.sync.missing === 0 || this.sync.state === 'synced';
  }

  /** Of the last tooth, where the wheel is in sync. */
  get lastPosition(): number {
    return this.placer.lastPosition();
  }

  /** Whole positions that can still be silent after the last tooth. */
  get silentPlaces(): number {
    const places = noGapAhead(this.sync) ? 1 : this.sync.missing + 1;
    return this.placer.nextIsOftenMissed() ? places + 1 : places;
  }

  /** Standard error of the last edge in positions, as noise and sample grid tell it; 0 where that is not known. */
  get edgeError(): number {
    const { told } = this.speed.meter.error;
    return told > 0 ? Math.sqrt(told) : 0;
  }

  /** Stop, gap or reversal: nothing is known of where teeth stand, and no interval reaches across. */
  forget(because: SyncLoss): void {
    this.silentAtEnd = this.silentPlaces;
    this.speed.forget();
    resetSync(this.sync, because);
    this.rowS = NaN;
    this.periodS = NaN;
    this.uneven.reset();
    this.placer.reset();
  }

  /** The interval that the next tooth closes is not a whole cycle: no speed reaches across it. */
  breakSpeed(): void {
    this.speed.meter.reset();
  }

  get isCounting(): boolean {
    return this.speed.meter.count > 0;
  }

  /** The falling edge at entry `i` of the queue ends the tooth at hand. */
  fall(queue: EdgeQueue, i: number): void {
    this.endTooth(queue, i);
    this.speed.fall(queue, i);
  }

  /** As `fall`, for an edge whose instant says nothing of the wheel: the end of a pulse of coded width, either way up. */
  endTooth(queue: EdgeQueue, i: number): void {
    this.placer.swingV = Math.abs(queue.extremeV[i]! - this.troughV);
  }

  /**
   * The rising edge at entry `i` of the queue: a tooth.
   * @returns true where a speed was found from it.
   */
  rise(queue: EdgeQueue, i: number): boolean {
    const { placer, speed } = this;
    const t = queue.midS[i]! - queue.delayS[i]!;
    placer.t = t;
    placer.rise(this.sign < 0);
    speed.sign = this.sign;
    const found = speed.rise(queue, i);
    if (found) {
      const { latest } = speed.meter;
      this.rpm = this.sign * latest.rpm;
      this.errorRpm = latest.errorRpm;
    }
    if (!Number.isNaN(this.rowS)) {
      this.periodS = t - this.rowS;
    }
    this.rowS = t;
    this.lastRiseS = t;
    this.troughV = queue.extremeV[i]!;
    placer.swingV = NaN;
    return found;
  }
}
