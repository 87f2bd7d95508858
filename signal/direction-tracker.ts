/**
 * Steps of a ring of states to net count and direction. The direction is said, and flips, only after two steps in a row
 * the same way; a bounce on one line gives a step and its opposite, which cancel.
 */
import { illegalStep } from '@/signal/step-table';
import type { StepTable } from '@/signal/step-table';

export type DirectionTracker = {
  table: StepTable;
  /** Level of each channel, -1 where not known. */
  levels: Int8Array;
  state: number;
  netSteps: number;
  illegalSteps: number;
  lastStep: number;
  /** +1 forward, -1 reverse, 0 unknown. */
  sense: -1 | 0 | 1;
};

export function createDirectionTracker(table: StepTable): DirectionTracker {
  return {
    table,
    levels: new Int8Array(table.weights.length).fill(-1),
    state: -1,
    netSteps: 0,
    illegalSteps: 0,
    lastStep: 0,
    sense: 0,
  };
}

/** After a gap nothing is known of the levels; the count stays. */
export function forgetLevels(tracker: DirectionTracker): void {
  tracker.levels.fill(-1);
  tracker.state = -1;
  forgetSense(tracker);
}

export function forgetSense(tracker: DirectionTracker): void {
  tracker.lastStep = 0;
  tracker.sense = 0;
}

/**
 * The level of channel `index` changed.
 * @returns +1, -1, `illegalStep`, or 0 where the state before was not known.
 */
export function stepTo(tracker: DirectionTracker, index: number, high: boolean): number {
  const { table, levels } = tracker;
  // An edge tells the level before it too.
  const known = levels[index] === -1 ? (high ? 0 : 1) : levels[index]!;
  const before = tracker.state;
  levels[index] = known;
  const from = before >= 0 ? before : stateOf(tracker);
  levels[index] = high ? 1 : 0;
  tracker.state = stateOf(tracker);
  if (from < 0 || tracker.state < 0) return 0;
  const step = table.steps[from * table.states + tracker.state]!;
  if (step === illegalStep) {
    tracker.illegalSteps++;
    tracker.lastStep = 0;
    return illegalStep;
  }
  if (step === 0) return 0;
  tracker.netSteps += step;
  if (step === tracker.lastStep) tracker.sense = step as 1 | -1;
  tracker.lastStep = step;
  return step;
}

function stateOf({ levels, table }: DirectionTracker): number {
  let state = 0;
  for (let i = 0; i < levels.length; i++) {
    if (levels[i] === -1) return -1;
    state += levels[i]! * table.weights[i]!;
  }
  return state;
}
