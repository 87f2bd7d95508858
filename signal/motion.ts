/**
 * From the edges of all channels, in order of time, to count, direction and speed.
 *
 * Speed comes from whole cycles: mid crossings on rising edges of the first channel (A or U). Where a ring of states is
 * known, an interval counts only if exactly one cycle was passed in it, so that dither at one edge makes no speed. Where
 * the width of a pulse tells the direction, its leading edge is the tooth, taken once that width is known.
 */
import type { EdgeQueue } from '@/signal/columns';
import type { DirectionTracker } from '@/signal/direction-tracker';
import { createIndexCounts } from '@/signal/index-counts';
import type { IndexCounts } from '@/signal/index-counts';
import type { RigSetup, Settings } from '@/signal/model';
import { PhaseLead } from '@/signal/phase-lead';
import { edgeRising } from '@/signal/pipeline-types';
import type { DirectionChange, SpeedColumns } from '@/signal/pipeline-types';
import type { RingMotion } from '@/signal/ring-motion';
import { ShaftState } from '@/signal/shaft-state';
import type { StateDwell } from '@/signal/state-dwell';
import { illegalStep } from '@/signal/step-table';
import { standStill, widthReader } from '@/signal/width-reader';
import type { WidthReader } from '@/signal/width-reader';

const noPhase = new PhaseLead();

export class Motion extends ShaftState {
  /** Where the width of a pulse tells the direction. */
  readonly widths: WidthReader | null;
  /** Where an index is there to hold the count against. */
  readonly indexCounts: IndexCounts | null;
  readonly stoppedAfterS: number;
  pulses = 0;
  // Numbers begin as numbers: a field that was ever undefined holds boxed ones for good.
  countsSinceS = NaN;
  quietSinceS = NaN;
  /** When last the signal swung though no edge came of it. */
  doubtedS = NaN;
  private readonly stoppedAfterSamples: number;
  private stopAt = NaN;
  private countsReset = false;
  /** Pulses since the last stop or lost samples that no direction was known of yet: the first that is known is theirs too. */
  private unsigned = 0;

  constructor(
    rig: RigSetup,
    settings: Settings,
    rateHz: number,
    startIndex: number,
    speed: SpeedColumns,
    directions: DirectionChange[],
  ) {
    super(rig, settings, rateHz, startIndex / rateHz, speed, directions);
    const { stoppedAfterS } = settings.speed;
    this.stoppedAfterS = stoppedAfterS;
    this.stoppedAfterSamples = stoppedAfterS * rateHz;
    this.widths = widthReader(rig, rateHz);
    const hasIndex = rig.channels.some(({ role }) => role === 'Z');
    this.indexCounts = hasIndex ? createIndexCounts(rig.wheel.pulsesPerTurn) : null;
    this.countsSinceS = startIndex / rateHz;
    this.stopAt = startIndex + this.stoppedAfterSamples;
    this.quietSinceS = startIndex / rateHz;
  }

  get positions(): number {
    return this.pulses + this.train.extraPositions;
  }

  get tracker(): DirectionTracker | null {
    return this.ring && this.ring.tracker;
  }

  /** Widths of the states of the ring, by direction. */
  get stateDwell(): StateDwell | null {
    return this.ring && this.ring.dwell;
  }

  /** How far A leads B in the direction at hand. */
  get phase(): PhaseLead {
    const { ring, sense } = this;
    return ring === null || sense === 0 ? noPhase : ring.phase(sense < 0);
  }

  /** Nothing came up to sample `at`: the shaft may have been found stopped on the way. */
  quietUpTo(at: number): void {
    if (this.state === 'stopped' || at <= this.stopAt) return;
    if (this.widths !== null && this.widths.mayHoldTooth(at, this.stopAt)) return;
    this.stop(this.quietSinceS + this.stoppedAfterS);
  }

  /**
   * At sample `at`, stream time `nowS`, the signal swings though no edge comes of it: nothing is known of the shaft, least of
   * all that it stands. Said again and again it stays so; after the last time stopped is as far away as after an edge.
   */
  doubt(at: number, nowS: number): void {
    this.doubtedS = nowS;
    this.stopAt = at + this.stoppedAfterSamples;
    this.quietSinceS = nowS;
    if (this.state === 'stopped') {
      this.wake(nowS);
    } else if (this.state === 'running') {
      this.forgetTeeth('timeout', nowS);
      this.turnTo('unknown', nowS);
      this.openUnknown(nowS);
    }
  }

  /** Samples were lost from `fromS` to `toS`; the next sample is `at`. */
  gap(fromS: number, toS: number, at: number): void {
    this.forgetTeeth('lost-samples', toS);
    this.ring?.forgetLevels();
    this.widths?.forget();
    this.state = 'unknown';
    this.turnTo('unknown', fromS);
    this.openUnknown(fromS);
    this.stopAt = at + this.stoppedAfterSamples;
    this.quietSinceS = toS;
    this.train.lastRiseS = NaN;
    this.countsReset = true;
    this.unsigned = 0;
  }

  /** Entry `i` of the queue of the channel with the place `role` in the arrangement (0 for A or U), in order of time. */
  take(queue: EdgeQueue, i: number, role: number): void {
    if (this.widths !== null) {
      this.takePulse(this.widths, queue, i);
      return;
    }
    this.note(queue, i);
    if (this.ring !== null) this.step(this.ring, queue, i, role);
    if (role !== 0) return;
    if ((queue.flags[i]! & edgeRising) !== 0) this.rise(queue, i);
    else this.train.fall(queue, i);
  }

  private takePulse(widths: WidthReader, queue: EdgeQueue, i: number): void {
    if (widths.isLead(queue, i)) {
      widths.hold(queue, i);
      return;
    }
    const way = widths.isHolding ? widths.read(queue, i) : standStill;
    if (way === standStill) return;
    this.note(widths.lead, 0);
    if (way === 0) {
      this.turnTo('unknown', this.lastEdgeS);
    } else {
      if (way < 0) this.pulses -= 2 * this.unsigned;
      this.unsigned = 0;
      this.face(way > 0 ? 1 : -1);
    }
    this.rise(widths.lead, 0);
    this.train.endTooth(queue, i);
  }

  /** An edge proves that the shaft turns. */
  private note(queue: EdgeQueue, i: number): void {
    const at = queue.at[i]!;
    if (at > this.stopAt) this.quietUpTo(at);
    const t = queue.midS[i]! - queue.delayS[i]!;
    this.stopAt = at + this.stoppedAfterSamples;
    this.quietSinceS = t;
    this.lastEdgeS = t;
    if (this.countsReset) {
      this.countsReset = false;
      this.countsSinceS = t;
    }
    if (this.state !== 'stopped') return;
    this.unsigned = 0;
    this.wake(t);
  }

  private step(ring: RingMotion, queue: EdgeQueue, i: number, role: number): void {
    const { tracker } = ring;
    tracker.t = this.lastEdgeS;
    const step = ring.take(queue, i, role);
    if (step !== 0 && step !== illegalStep) {
      this.pulses = tracker.netSteps / tracker.table.stepsPerCycle;
      if (this.state === 'running') this.train.uneven.noteState(ring.stateS / this.train.sync.perPositionS);
      if (tracker.sense !== this.sense && tracker.sense !== 0) this.face(tracker.sense);
    }
    // Right after turning back it would be the other direction's.
    if (role === 1 && step === this.sense && tracker.levels[1] === 1 && this.state === 'running') {
      ring.phase(this.sense < 0).learn((tracker.t - this.train.rowS) / this.train.sync.perPositionS);
    }
  }

  /** A tooth of the first channel. */
  private rise(queue: EdgeQueue, i: number): void {
    const { train, ring, indexCounts } = this;
    if (ring === null) {
      this.pulses += this.sense < 0 ? -1 : 1;
      if (this.sense === 0) this.unsigned++;
    } else if (!ring.closeCycle() && train.isCounting) {
      train.breakSpeed();
      this.openUnknown(this.lastEdgeS);
    }
    this.calm.teeth++;
    if (indexCounts !== null) {
      const n = indexCounts.teeth++ & indexCounts.mask;
      indexCounts.t[n] = this.lastEdgeS;
      indexCounts.counts[n] = ring === null ? this.pulses : ring.tracker.netSteps;
    }
    if (this.widths !== null && this.widths.isBlind) return;
    if (train.rise(queue, i)) this.run();
  }
}
