/**
 * States of a ring that were not really passed. Where an input froze, or a converter gave the same samples twice, the shaft
 * turned on meanwhile, and all lines that should have changed do so between two samples (or as fast as the filter lets them):
 * the state before lasted as long as those that were left out, and what lies between them took no time. In which order the
 * lines seem to change is chance, so that the count may even be right. As many states that look like a single step back show
 * only by the pace: what follows comes when the turn that was left out would have been over.
 *
 * Less than one state gets lost in a single edge that comes late: nothing is skipped, and nothing shows.
 */
import { EdgeWalk } from '@/signal/findings/edge-walk';
import { LaneGaps } from '@/signal/findings/lane-gaps';
import { lanePhases, ringWidths, wholeTurns } from '@/signal/findings/lane-phases';
import type { RuleContext } from '@/signal/findings/rule';
import type { StepTable } from '@/signal/step-table';
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

/** A state so much shorter than an even one was not really passed: no order of the lines is to be trusted. */
const rushed = 0.25;
/** The one before it lasts for the one that was left out too; sound ones are up to a third longer than even. */
const longBefore = 1.4;
/** A step back at full speed: the pace may differ by so much of a state, and a steady state by such a share. */
const paceWithin = 0.6;
const steadyWithin = 0.45;
const teethNeeded = 7;
const leadTeeth = 3;
const longestLeadS = 1;

/** `from` and `to`: the states before and after it; -1 where not known. */
export type StateJump = { atS: number; from: number; to: number };

type Step = { atS: number; lane: number; step: number; isIllegal: boolean; from: number; to: number };

export class StateJumps {
  /** Those that the last `tick` found, in order. */
  readonly found: StateJump[] = [];
  /** Something may be one, and what comes next will tell. */
  isPending = false;
  private readonly context: RuleContext;
  private readonly table: StepTable;
  private readonly walk: EdgeWalk;
  private readonly gaps: LaneGaps;
  /** All that ended up to here has been judged, s. */
  private doneS = -Infinity;

  constructor(context: RuleContext, table: StepTable) {
    this.context = context;
    this.table = table;
    this.walk = new EdgeWalk(context, table);
    this.gaps = new LaneGaps(context);
  }

  /** @param isBroken the motion came upon what cannot be. */
  tick(isBroken: boolean): void {
    const { gaps, found } = this;
    // Setting a length takes far longer than asking for it.
    if (found.length > 0) found.length = 0;
    gaps.scan();
    const { log } = this.context.paths[this.context.primary]!;
    const toothS = usualTooth(log);
    const stateS = toothS / this.table.stepsPerCycle;
    const isSuspect = gaps.hasRepeat || gaps.leastS < rushed * stateS;
    if (isBroken || isSuspect || this.isPending) this.readBack(toothS);
    else this.doneS = gaps.lastS;
  }

  forget(toS: number): void {
    this.gaps.forget(toS);
    this.doneS = toS;
    this.isPending = false;
  }

  private readBack(toothS: number): void {
    const { walk, doneS } = this;
    const steps: Step[] = [];
    walk.start(doneS - Math.min(longestLeadS, Number.isNaN(toothS) ? 0.01 : leadTeeth * toothS));
    while (walk.advance()) {
      const { atS, lane, step, isIllegal, tracker } = walk;
      steps.push({ atS, lane, step, isIllegal, from: tracker.stateBefore, to: tracker.cameTo });
    }
    this.isPending = false;
    const stateS = toothS / this.table.stepsPerCycle;
    let first = 0;
    while (first < steps.length && !this.isPending) {
      const last = jumpEnd(steps, first, rushed * stateS);
      if (steps[last]!.atS > doneS) this.judge(steps, first, last, stateS);
      if (!this.isPending) this.doneS = Math.max(this.doneS, steps[last]!.atS);
      first = last + 1;
    }
  }

  /** Edges `first` to `last` came at once, or one alone. */
  private judge(steps: readonly Step[], first: number, last: number, stateS: number): void {
    let isIllegal = false;
    for (let k = first; k <= last; k++) isIllegal ||= steps[k]!.isIllegal;
    if (!isIllegal && last === first) {
      this.judgeStepBack(steps, first, stateS);
      return;
    }
    const { atS, from } = steps[first]!;
    if (!isIllegal) {
      const beforeS = first > 0 ? atS - steps[first - 1]!.atS : NaN;
      if (!(beforeS > longBefore * stateS)) return;
    }
    // Lines that come to and fro, or a shaft that starts with a jerk, go on as fast.
    const after = steps[last + 1];
    this.isPending = after === undefined;
    if (!after) return;
    const tookS = steps[last]!.atS - atS;
    if (!isIllegal && (after.atS - steps[last]!.atS < 2 * tookS || this.isAlwaysNarrow())) return;
    this.found.push({ atS, from, to: steps[last]!.to });
  }

  /** All states of a turn of the ring but one: looks like a step back, and the way on follows at once. */
  private judgeStepBack(steps: readonly Step[], k: number, stateS: number): void {
    const { stepsPerCycle } = this.table;
    const own = steps[k]!;
    const before = steps[k - 1];
    const earlier = steps[k - 2];
    const earliest = steps[k - 3];
    if (!before || !earlier || !earliest || own.lane !== before.lane) return;
    const sense = before.step;
    if (Math.abs(sense) !== 1 || own.step !== -sense || earlier.step !== sense) return;
    const goesOn = (a: Step, b: Step) => Math.abs((b.atS - a.atS) / stateS - 1) < steadyWithin;
    if (!goesOn(earlier, before) || !goesOn(earliest, earlier)) return;
    if (own.atS - before.atS < (stepsPerCycle - 1 - paceWithin) * stateS) return;
    const [back, next, later] = [steps[k + 1], steps[k + 2], steps[k + 3]];
    const all = [back, next, later];
    if (all.some((one) => one && one.step !== sense)) return;
    this.isPending = !later;
    if (!back || !next || !later || !goesOn(next, later)) return;
    const places = (next.atS - before.atS) / stateS;
    if (Math.abs(places - stepsPerCycle - 1) > paceWithin) return;
    this.found.push({ atS: own.atS, from: own.from, to: own.to });
  }

  /** Channels that stand nearly in phase always pass a state fast: a matter of their places. */
  private isAlwaysNarrow(): boolean {
    const { context, table } = this;
    const phases = lanePhases(context, wholeTurns(context.rig.wheel), -Infinity);
    if (!phases) return false;
    const widths = ringWidths(phases, table.weights);
    return table.order.some((state) => widths[state]! < 180 / table.stepsPerCycle);
  }
}

/** The last of the edges of different channels that follow `first` within no time. */
function jumpEnd(steps: readonly Step[], first: number, withinS: number): number {
  let last = first;
  while (last + 1 < steps.length) {
    const next = steps[last + 1]!;
    if (next.lane === steps[last]!.lane || !(next.atS - steps[last]!.atS < withinS)) break;
    last++;
  }
  return last;
}

/** The median of the last few teeth, s; NaN where there are too few to say. Single teeth that were held up do not count. */
export function usualTooth(log: ToothLog): number {
  const first = log.count - 1 - teethNeeded;
  if (first < readableFrom(log, 0)) return NaN;
  const { riseS, mask } = log;
  for (let i = 0; i < teethNeeded; i++) {
    const value = riseS[(first + i + 1) & mask]! - riseS[(first + i) & mask]!;
    let k = i;
    for (; k > 0 && sorted[k - 1]! > value; k--) sorted[k] = sorted[k - 1]!;
    sorted[k] = value;
  }
  return sorted[teethNeeded >> 1]!;
}

const sorted = new Float64Array(teethNeeded);
