/**
 * How wide each state of the ring is, in degrees of the electrical cycle, as running means, each direction its own: sensors
 * that are off their places, duties that are not one half and hysteresis all show in it, and the last of these the other
 * way round in the other direction.
 *
 * A cycle teaches where every state was passed once, one after another, and where it took nearly as long as the one before.
 */
import type { StepTable } from '@/signal/step-table';

const share = 1 / 16;
const mostChange = 1.25;

export class StateDwell {
  /** Degrees by state; NaN where not known, and for states that the ring does not have. */
  readonly forwardDeg: Float64Array;
  readonly reverseDeg: Float64Array;
  /** Cycles that each was learnt from. */
  forwardCycles = 0;
  reverseCycles = 0;
  /** Time spent in each state in the cycle at hand, s, and steps made in it: for the caller to add to. */
  readonly spentS: Float64Array;
  steps = 0;
  private readonly table: StepTable;
  private cycleS = NaN;

  constructor(table: StepTable) {
    this.table = table;
    this.forwardDeg = new Float64Array(table.states).fill(NaN);
    this.reverseDeg = new Float64Array(table.states).fill(NaN);
    this.spentS = new Float64Array(table.states);
  }

  /** No cycle reaches across what happened. */
  reset(): void {
    this.spentS.fill(0);
    this.steps = 0;
    this.cycleS = NaN;
  }

  /** A cycle is over. */
  close(isWhole: boolean, isReverse: boolean): void {
    const { table, spentS } = this;
    const { order, stepsPerCycle } = table;
    let cycleS = 0;
    for (let k = 0; k < stepsPerCycle; k++) cycleS += spentS[order[k]!]!;
    const change = cycleS / this.cycleS;
    if (isWhole && this.steps === stepsPerCycle && change > 1 / mostChange && change < mostChange) {
      const deg = isReverse ? this.reverseDeg : this.forwardDeg;
      if (isReverse) this.reverseCycles++;
      else this.forwardCycles++;
      for (let k = 0; k < stepsPerCycle; k++) {
        const state = order[k]!;
        const here = (360 * spentS[state]!) / cycleS;
        const old = deg[state]!;
        deg[state] = old === old ? old + (here - old) * share : here;
      }
    }
    this.cycleS = isWhole ? cycleS : NaN;
    this.steps = 0;
    for (let k = 0; k < stepsPerCycle; k++) spentS[order[k]!] = 0;
  }
}
