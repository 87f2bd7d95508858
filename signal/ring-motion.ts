/**
 * The ring of states of several channels as edges come: steps, what cannot be, how wide the states are, how far A leads B,
 * and whether exactly one cycle was passed between two rising edges of the first channel.
 */
import type { EdgeQueue } from '@/signal/columns';
import {
  createDirectionTracker,
  forgetLevels,
  forgetSense,
  stepTo,
  stepTogether,
} from '@/signal/direction-tracker';
import type { DirectionTracker } from '@/signal/direction-tracker';
import type { RigSetup } from '@/signal/model';
import { PhaseLead } from '@/signal/phase-lead';
import { edgeRising } from '@/signal/pipeline-types';
import { StateDwell } from '@/signal/state-dwell';
import { illegalStep, stepTable } from '@/signal/step-table';
import type { StepTable } from '@/signal/step-table';

/** Two edges between the same two samples have an order only where they are this far apart: so good is a straight line. */
const leastApart = 0.1;
/** The same where the noise is not known, as where a period has but few samples. */
const apartInDoubt = 0.25;

export class RingMotion {
  readonly tracker: DirectionTracker;
  readonly dwell: StateDwell;
  /** In each direction, since hysteresis and duty shift it either way. */
  readonly forwardPhase = new PhaseLead();
  readonly reversePhase = new PhaseLead();
  /** Time spent in the state that the last step left, s; NaN where not known. */
  stateS = NaN;
  private readonly rateHz: number;
  private netAtRise = NaN;
  private lastStepS = NaN;
  private lastRole = -1;
  private lastAt = NaN;
  private lastSigmaS = NaN;

  constructor(table: StepTable, rateHz: number) {
    this.tracker = createDirectionTracker(table);
    this.dwell = new StateDwell(table);
    this.rateHz = rateHz;
  }

  phase(isReverse: boolean): PhaseLead {
    return isReverse ? this.reversePhase : this.forwardPhase;
  }

  /** Lost samples: nothing is known of the levels; the counts stay. */
  forgetLevels(): void {
    forgetLevels(this.tracker);
  }

  forgetSense(): void {
    forgetSense(this.tracker);
  }

  /** No cycle reaches across what happened. */
  forgetCycle(): void {
    this.netAtRise = NaN;
    this.lastStepS = NaN;
    this.dwell.reset();
  }

  /**
   * Entry `i` of the queue of the channel with the place `role`; `tracker.t` is its instant.
   * @returns steps of the ring that it made; `illegalStep` where the count is not known any more.
   */
  take(queue: EdgeQueue, i: number, role: number): number {
    const { tracker, dwell } = this;
    const at = queue.at[i]!;
    const high = (queue.flags[i]! & edgeRising) !== 0;
    const together = at - this.lastAt < 1 && role !== this.lastRole && this.isTogether(queue, i);
    const step = together ? stepTogether(tracker, role, high) : stepTo(tracker, role, high);
    this.lastRole = role;
    this.lastAt = at;
    this.lastSigmaS = queue.sigmaS[i]!;
    if (step === 0) return 0;
    if (step === illegalStep) {
      this.netAtRise = NaN;
      this.stateS = this.lastStepS = NaN;
      return step;
    }
    const stateS = tracker.t - this.lastStepS;
    this.stateS = stateS;
    this.lastStepS = tracker.t;
    const left = tracker.stateBefore;
    dwell.spentS[left] = dwell.spentS[left]! + stateS;
    dwell.steps++;
    return step;
  }

  /**
   * The first channel rose.
   * @returns whether exactly one cycle was passed since it rose last.
   */
  closeCycle(): boolean {
    const { tracker } = this;
    const passed = Math.abs(tracker.netSteps - this.netAtRise);
    this.netAtRise = tracker.netSteps;
    const isWhole = passed === tracker.table.stepsPerCycle;
    this.dwell.close(isWhole, tracker.sense < 0);
    return isWhole;
  }

  private isTogether(queue: EdgeQueue, i: number): boolean {
    const at = queue.at[i]!;
    if (Math.ceil(at) !== Math.ceil(this.lastAt)) return false;
    const variance = queue.sigmaS[i]! ** 2 + this.lastSigmaS ** 2;
    const doubt = Number.isNaN(variance)
      ? apartInDoubt
      : Math.max(leastApart, 2 * Math.sqrt(variance) * this.rateHz);
    return at - this.lastAt < doubt;
  }
}

/** Null where one channel alone tells all that there is. */
export function ringMotion({ sensing }: RigSetup, rateHz: number): RingMotion | null {
  const table = stepTable(sensing);
  return table && new RingMotion(table, rateHz);
}
