/**
 * Arrangements of several switched channels as rings of states: which change is a step forward, which backward, and which
 * cannot have happened without one in between.
 *
 * Quadrature: state = 2 A + B, forward (A leads B) is 00 -> 10 -> 11 -> 01 -> 00. Three-hall: state = U + 2 V + 4 W, forward
 * is 1 -> 3 -> 2 -> 6 -> 4 -> 5 -> 1; 0 and 7 never happen on a sound set.
 */
import type { Sensing } from '@/signal/model';

/** A jump that leaves the count unknown. */
export const illegalStep = 9;

export type StepTable = {
  /** Weight of each channel in the state, in the order of `neededRoles`. */
  weights: readonly number[];
  stepsPerCycle: number;
  /** Step from state `from` to `to` at `from * states + to`: +1, -1, 0 or `illegalStep`. */
  steps: Int8Array;
  states: number;
  /** The states in the order of turning forward. */
  order: readonly number[];
  /** Place of each state in that order; -1 where it is none of the ring's. */
  places: Int8Array;
};

/** The ring of an arrangement, or null for one whose channels make none (one channel alone). */
export function stepTable(sensing: Sensing): StepTable | null {
  if (sensing === 'quadrature') return ring([0b00, 0b10, 0b11, 0b01], [2, 1], 4);
  if (sensing === 'three-hall') return ring([1, 3, 2, 6, 4, 5], [1, 2, 4], 8);
  return null;
}

function ring(order: readonly number[], weights: readonly number[], states: number): StepTable {
  const steps = new Int8Array(states * states).fill(illegalStep);
  const places = new Int8Array(states).fill(-1);
  for (let state = 0; state < states; state++) steps[state * states + state] = 0;
  order.forEach((from, index) => {
    const next = order[(index + 1) % order.length]!;
    places[from] = index;
    steps[from * states + next] = 1;
    steps[next * states + from] = -1;
  });
  return { weights, stepsPerCycle: order.length, steps, states, order, places };
}
