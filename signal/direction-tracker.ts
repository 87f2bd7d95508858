/**
 * Steps of a ring of states to net count and direction. The direction is said, and flips, only after two steps in a row
 * the same way; a bounce on one line gives a step and its opposite, which cancel.
 *
 * One line changes at a time, so that a single edge never jumps over a state. What cannot be, and is counted:
 * a state that the ring does not have (three-hall: no line or all three high), and two lines that changed so close to
 * each other that their order is not known: a state was passed unseen. On three lines the way between is then still one
 * and the count goes on; on two either way fits, so that the count is not known.
 */
import { illegalStep } from '@/signal/step-table';
import type { StepTable } from '@/signal/step-table';

export type DirectionTracker = {
  table: StepTable;
  /** Level of each channel, -1 where not known. */
  levels: Int8Array;
  /** The last state of the ring, -1 where not known. */
  state: number;
  netSteps: number;
  /** All that cannot be: states that the ring does not have, and states passed unseen. */
  illegalSteps: number;
  invalidStates: number;
  skippedStates: number;
  /** Instant of the edge at hand, for the caller to write, and of the last that cannot be, s; NaN: none. */
  t: number;
  lastIllegalS: number;
  /** How often each state was come to, those that the ring does not have included. */
  readonly visits: Float64Array;
  lastStep: number;
  /** +1 forward, -1 reverse, 0 unknown. */
  sense: -1 | 0 | 1;
  /** What the last edge did: the state of the ring before it, the one that it came to, and its step. */
  stateBefore: number;
  cameTo: number;
  made: number;
};

/** A ring of states of which nothing is known yet. It is told of edges in order of time, one channel at a time. */
export function createDirectionTracker(table: StepTable): DirectionTracker {
  return {
    table,
    levels: new Int8Array(table.weights.length).fill(-1),
    state: -1,
    netSteps: 0,
    illegalSteps: 0,
    invalidStates: 0,
    skippedStates: 0,
    t: NaN,
    lastIllegalS: NaN,
    visits: new Float64Array(table.states),
    lastStep: 0,
    sense: 0,
    stateBefore: -1,
    cameTo: -1,
    made: 0,
  };
}

/** After a gap nothing is known of the levels; the counts stay. */
export function forgetLevels(tracker: DirectionTracker): void {
  tracker.levels.fill(-1);
  tracker.state = tracker.stateBefore = tracker.cameTo = -1;
  forgetSense(tracker);
}

/** After a stop or a gap two steps the same way must prove the direction anew. */
export function forgetSense(tracker: DirectionTracker): void {
  tracker.lastStep = 0;
  tracker.sense = 0;
}

/** Bit `state` is set where that state was seen since the stream began. */
export function seenStates({ visits }: DirectionTracker): number {
  let mask = 0;
  for (let state = 0; state < visits.length; state++) if (visits[state]! > 0) mask |= 1 << state;
  return mask;
}

/**
 * The level of channel `index` changed.
 * @returns +1 or -1, +2 or -2 where a state that the ring does not have lay between, `illegalStep`, or 0 where there was
 * no step of the ring or the state before was not known.
 */
export function stepTo(tracker: DirectionTracker, index: number, high: boolean): number {
  const { table, levels } = tracker;
  // An edge tells the level before it too.
  if (levels[index] === -1) levels[index] = high ? 0 : 1;
  const from = tracker.state >= 0 ? tracker.state : ringState(tracker);
  levels[index] = high ? 1 : 0;
  const to = levelState(tracker);
  tracker.stateBefore = from;
  tracker.cameTo = to;
  tracker.made = 0;
  if (to < 0) return 0;
  tracker.visits[to] = tracker.visits[to]! + 1;
  if (table.places[to]! < 0) {
    tracker.invalidStates++;
    noteIllegal(tracker);
    return 0;
  }
  tracker.state = to;
  if (from < 0 || from === to) return 0;
  const step = table.steps[from * table.states + to]!;
  return step === illegalStep ? jump(tracker, from, to) : make(tracker, step);
}

/** As `stepTo`, for an edge that came together with the one before it, on another channel, in an order that is not known. */
export function stepTogether(tracker: DirectionTracker, index: number, high: boolean): number {
  const { stateBefore, cameTo, table } = tracker;
  tracker.netSteps -= tracker.made;
  // The state between was never seen.
  if (cameTo >= 0) {
    tracker.visits[cameTo] = tracker.visits[cameTo]! - 1;
    if (table.places[cameTo]! < 0) {
      tracker.invalidStates--;
      tracker.illegalSteps--;
    }
  }
  tracker.state = stateBefore;
  tracker.levels[index] = high ? 1 : 0;
  const to = levelState(tracker);
  tracker.cameTo = to;
  tracker.made = 0;
  if (to < 0) return 0;
  tracker.visits[to] = tracker.visits[to]! + 1;
  if (table.places[to]! < 0) {
    tracker.invalidStates++;
    noteIllegal(tracker);
    return 0;
  }
  tracker.state = to;
  return stateBefore < 0 ? 0 : jump(tracker, stateBefore, to);
}

/** From one state of the ring to another that is not its neighbour. */
function jump(tracker: DirectionTracker, from: number, to: number): number {
  const { places, stepsPerCycle } = tracker.table;
  const apart = (places[to]! - places[from]! + stepsPerCycle) % stepsPerCycle;
  tracker.skippedStates++;
  noteIllegal(tracker);
  if (2 * apart === stepsPerCycle) {
    tracker.lastStep = 0;
    return illegalStep;
  }
  return make(tracker, 2 * apart < stepsPerCycle ? apart : apart - stepsPerCycle);
}

function make(tracker: DirectionTracker, step: number): number {
  const way = step > 0 ? 1 : -1;
  tracker.netSteps += step;
  if (way === tracker.lastStep) tracker.sense = way;
  tracker.lastStep = way;
  tracker.made = step;
  return step;
}

function noteIllegal(tracker: DirectionTracker): void {
  tracker.illegalSteps++;
  tracker.lastIllegalS = tracker.t;
}

/** The state that the levels say; -1 while one of them is not known. */
function levelState({ levels, table }: DirectionTracker): number {
  let state = 0;
  for (let i = 0; i < levels.length; i++) {
    if (levels[i] === -1) return -1;
    state += levels[i]! * table.weights[i]!;
  }
  return state;
}

function ringState(tracker: DirectionTracker): number {
  const state = levelState(tracker);
  return state >= 0 && tracker.table.places[state]! >= 0 ? state : -1;
}
