import { lanePhases, resolutionDeg, ringWidths, wholeTurns } from '@/signal/findings/lane-phases';
import { judgePair, judgeTriple } from '@/signal/findings/ring-places';
import type { RingVerdict } from '@/signal/findings/ring-places';
import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { wordsFor } from '@/signal/finding-words';
import { stepTable } from '@/signal/step-table';
import type { StepTable } from '@/signal/step-table';

const everyS = 0.5;
/** States that differ from even ones by less than this share of them are well within all limits. */
const plainlyEven = 0.16;

/**
 * The channels of a ring do not share the cycle evenly, so that its narrowest state is soon too short to be seen. Judged
 * from means over whole turns, each cycle in itself, whatever the speed and the direction. Limits in `ring-places.ts`.
 */
export class PhaseErrorRule implements FindingRule {
  readonly latches = [new FindingLatch(2)];
  private readonly context: RuleContext;
  private readonly table: StepTable | null;
  private dueS = -Infinity;
  private teeth = 0;
  private cycles = 0;

  constructor(context: RuleContext) {
    this.context = context;
    this.table = stepTable(context.rig.sensing);
  }

  tick(nowS: number): void {
    if (this.table && nowS >= this.dueS) {
      this.dueS = nowS + everyS;
      this.judge(this.table, nowS);
    }
    this.latches[0]!.rest(nowS);
  }

  private judge(table: StepTable, nowS: number): void {
    const { context } = this;
    const latch = this.latches[0]!;
    if (this.isPlainlyEven(table) && !latch.open) return;
    const phases = lanePhases(context, wholeTurns(context.rig.wheel), -Infinity);
    // What has ended is no business of this rule any more.
    if (!phases || nowS - phases.toS > 4 * phases.periodS + context.settleS) return;
    const widths = ringWidths(phases, table.weights);
    const offDeg = resolutionDeg(phases, context);
    const verdict: RingVerdict | null =
      table.stepsPerCycle === 4
        ? judgePair(phases, widths, offDeg, latch.open?.severity ?? null)
        : judgeTriple(phases, widths, offDeg, latch.open?.severity ?? null);
    if (!verdict) return;
    const { name } = context.paths[context.lanes[verdict.lane]!]!.channel;
    latch.raise(
      {
        code: 'phase-error',
        channel: name,
        from: phases.fromS,
        severity: verdict.severity,
        outcome: 'found',
        at: phases.toS,
        evidence: verdict.evidence,
        ...wordsFor('phase-error', name, verdict.evidence),
        causedBy: null,
      },
      nowS,
    );
  }

  /** By the running widths of the states, where the teeth since the last look were learnt from. */
  private isPlainlyEven({ order, stepsPerCycle }: StepTable): boolean {
    const { motion, paths, primary } = this.context;
    const { stateDwell } = motion;
    const { count } = paths[primary]!.log;
    if (!stateDwell) return false;
    const { forwardCycles, reverseCycles, forwardDeg, reverseDeg } = stateDwell;
    const teeth = count - this.teeth;
    const cycles = forwardCycles + reverseCycles - this.cycles;
    this.teeth = count;
    this.cycles = forwardCycles + reverseCycles;
    if (cycles < teeth / 2) return false;
    const deg = motion.reversed ? reverseDeg : forwardDeg;
    const even = 360 / stepsPerCycle;
    return order.every((state) => Math.abs(deg[state]! - even) < plainlyEven * even);
  }
}
