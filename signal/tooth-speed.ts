/**
 * From teeth to speed: how many positions each interval spans, which tooth of the wheel it ends with, and what speed follows.
 *
 * Numbers that come with every tooth are read from the queue: passed to a function that is not inlined, they would be boxed.
 */
import { delayGuessed, roomForSpeed } from '@/signal/columns';
import type { EdgeQueue } from '@/signal/columns';
import { judgeInterval, judgeWaiting } from '@/signal/gap-judge';
import { moveOn } from '@/signal/gap-sync';
import type { GapSync } from '@/signal/gap-sync';
import type { RigSetup, Settings } from '@/signal/model';
import type { SpeedColumns } from '@/signal/pipeline-types';
import { Pitch } from '@/signal/pitch';
import { PlainJudge } from '@/signal/plain-judge';
import { SpeedMeter } from '@/signal/speed-meter';
import { stepTable } from '@/signal/step-table';
import type { Unevenness } from '@/signal/unevenness';
import type { WheelFaceMeter } from '@/signal/wheel-face-meter';
import type { WheelTracker } from '@/signal/wheel-tracker';

export class ToothSpeed {
  readonly meter: SpeedMeter;
  readonly pitch: Pitch;
  /** -1 while the shaft turns in reverse. */
  sign: 1 | -1 = 1;
  /** Missing positions of the wheel that were passed, pulses that were no teeth taken off. */
  extraPositions = 0;
  private readonly sync: GapSync;
  private readonly uneven: Unevenness;
  private readonly columns: SpeedColumns;
  /** Of a wheel without a gap and without other channels, which would tell. */
  private readonly plain: PlainJudge | null;
  private lastT = NaN;
  private firstGuessed = false;
  private firstMidS = NaN;
  /** A tooth whose interval waits for the next one to be judged, s; NaN: none. */
  private waitingT = NaN;
  private waitingSigmaS = NaN;
  private place = 0;
  /** Positions passed out of sync. */
  private unsynced = 0;

  constructor(
    { sensing, wheel }: RigSetup,
    { speed: { method, windowS } }: Settings,
    sync: GapSync,
    uneven: Unevenness,
    tracker: WheelTracker,
    face: WheelFaceMeter | null,
    columns: SpeedColumns,
  ) {
    this.sync = sync;
    this.uneven = uneven;
    this.columns = columns;
    this.meter = new SpeedMeter(method, windowS, wheel.pulsesPerTurn, wheel.gearRatio);
    this.pitch = new Pitch(this.meter, tracker, face);
    this.plain = sync.missing === 0 && !stepTable(sensing) ? new PlainJudge(sync) : null;
  }

  /** Stop, gap or reversal: no interval reaches across. */
  forget(): void {
    this.meter.reset();
    this.pitch.lose();
    this.plain?.reset();
    this.waitingT = NaN;
    this.unsynced = 0;
  }

  /** The falling edge at entry `i` of the queue ends the tooth at hand. */
  fall(queue: EdgeQueue, i: number): void {
    this.meter.t = queue.midS[i]! - queue.delayS[i]!;
    this.meter.fall();
  }

  /**
   * The rising edge at entry `i` of the queue: a tooth.
   * @returns true where a speed was found from it, which is the meter's latest.
   */
  rise(queue: EdgeQueue, i: number): boolean {
    const { meter, sync } = this;
    const t = queue.midS[i]! - queue.delayS[i]!;
    const guessed = (queue.flags[i]! & delayGuessed) !== 0;
    let found = false;
    if (meter.count === 0) {
      this.firstGuessed = guessed;
      this.firstMidS = queue.midS[i]!;
      this.pitch.begin();
      meter.t = t;
      meter.sigmaS = queue.sigmaS[i]!;
      meter.rateHz = queue.rateHz;
      meter.add(this.place);
    } else {
      if (meter.count === 1 && this.firstGuessed && !guessed) {
        this.lastT = this.firstMidS - queue.delayS[i]!;
        meter.retimeFirst(this.lastT);
      }
      sync.intervalS = t - this.lastT;
      if (Number.isNaN(this.waitingT)) this.pitch.follow(this.sign < 0);
      else if (this.resumeWaiting()) found = true;
      const spans = this.plain ? this.plain.judge() : judgeInterval(sync);
      if (spans > 0) {
        meter.t = t;
        meter.sigmaS = queue.sigmaS[i]!;
        meter.gridS = queue.gridS[i]!;
        if (this.advance(spans)) found = true;
      } else {
        this.waitingT = t;
        this.waitingSigmaS = queue.sigmaS[i]!;
      }
    }
    this.lastT = t;
    return found;
  }

  /** The tooth whose interval waited is placed, now that the next interval is known. */
  private resumeWaiting(): boolean {
    const { meter } = this;
    const spans = this.plain ? this.plain.judgeWaiting() : judgeWaiting(this.sync);
    const t = this.waitingT;
    this.waitingT = NaN;
    if (spans < 0) {
      meter.replaceNewest(t);
      return false;
    }
    if (spans === 0) {
      // A pulse, and counted as one, but no tooth of the wheel.
      if (!this.plain) this.extraPositions -= this.sign;
      return false;
    }
    meter.t = t;
    meter.sigmaS = this.waitingSigmaS;
    return this.advance(spans);
  }

  /** The tooth that the meter is set to stands `spans` positions after the one before. */
  private advance(spans: number): boolean {
    const { meter, columns, uneven } = this;
    this.place += spans;
    if (this.sync.missing > 0) this.proveGap(spans);
    const { times, next, mask } = meter.ring;
    if (meter.latest.rpm > 0) {
      uneven.ratio = (meter.t - times[(next - 1) & mask]!) / (meter.error.perPositionS * spans);
      uneven.notePitch();
    }
    this.pitch.mark(this.place, spans);
    if (!meter.add(this.place)) return false;
    const i = roomForSpeed(columns);
    columns.t[i] = meter.t;
    columns.rpm[i] = this.sign * meter.latest.rpm;
    columns.errorRpm[i] = meter.latest.errorRpm;
    return true;
  }

  /** Positions of a wheel with a gap are counted surely in sync only; in sync it should be two turns after a start. */
  private proveGap(spans: number): void {
    const { sync, meter } = this;
    this.extraPositions += this.sign * moveOn(sync, spans);
    this.unsynced = sync.state === 'synced' ? 0 : this.unsynced + spans;
    meter.error.unproven = this.unsynced > 2 * sync.positions ? sync.missing : 0;
  }
}
