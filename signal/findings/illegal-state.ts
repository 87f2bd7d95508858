import { EdgeWalk, stateWord } from '@/signal/findings/edge-walk';
import { lanePhases, ringWidths, wholeTurns } from '@/signal/findings/lane-phases';
import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { wordsFor } from '@/signal/finding-words';
import { stepTable } from '@/signal/step-table';
import type { StepTable } from '@/signal/step-table';
import type { ToothLog } from '@/signal/tooth-log';

/** So many skips within the window open it; one in the window keeps it. */
const opensAt = 2;
/** The window: whichever is longer. */
const windowS = 2;
const windowTurns = 3;
const faultPerTurn = 1;
/** A state so much shorter than an even one was not really passed: the lines jumped, and no order of them is to be trusted. */
const rushed = 0.25;
const teethNeeded = 6;

/**
 * The ring of states skipped one, so that the count is not known any more. The motion counts skips that show as such. Where
 * its direction or speed broke, the logs are read back too: lines that jump at once may be taken for steps in one order or
 * another, which the way back betrays.
 */
export class IllegalStateRule implements FindingRule {
  readonly latches = [new FindingLatch(windowS)];
  private readonly context: RuleContext;
  private readonly table: StepTable | null;
  private readonly walk: EdgeWalk | null;
  /** Instants of the last skips, s. */
  private readonly lately = new Float64Array(opensAt).fill(-Infinity);
  private seen = 0;
  private disturbances = 0;
  private skips = 0;
  /** The first skip that was read back last, s. */
  private firstS = NaN;
  private readonly kinds: Uint32Array;
  private teethBefore = 0;
  private lastTickS = -Infinity;
  /** The first after lost samples says nothing of the rig. */
  private forgiven = 0;

  constructor(context: RuleContext) {
    this.context = context;
    this.table = stepTable(context.rig.sensing);
    this.walk = this.table && new EdgeWalk(context, this.table);
    this.kinds = new Uint32Array(this.table ? this.table.states ** 2 : 0);
  }

  tick(nowS: number): void {
    const { tracker, calm } = this.context.motion;
    if (tracker && this.table && this.walk) {
      const isCounted = tracker.illegalSteps !== this.seen;
      if (isCounted || calm.disturbances !== this.disturbances) {
        const fresh = Math.max(tracker.illegalSteps - this.seen, this.readBack(this.walk, this.table));
        if (fresh > this.forgiven) this.noteSkips(fresh - this.forgiven, nowS);
        this.forgiven = Math.max(0, this.forgiven - fresh);
      }
      this.seen = tracker.illegalSteps;
      this.disturbances = calm.disturbances;
    }
    this.lastTickS = nowS;
    this.latches[0]!.rest(nowS);
  }

  gap(): void {
    this.lately.fill(-Infinity);
    this.forgiven = 1;
  }

  private noteSkips(fresh: number, nowS: number): void {
    const { context, lately } = this;
    const latch = this.latches[0]!;
    const { log } = context.paths[context.primary]!;
    const { pulsesPerTurn } = context.rig.wheel;
    for (let k = 0; k < Math.min(fresh, opensAt); k++) {
      lately.copyWithin(0, 1);
      lately[opensAt - 1] = nowS;
    }
    const withinS = Math.max(windowS, windowTurns * pulsesPerTurn * shortestTooth(log) || 0);
    if (!latch.open && nowS - lately[0]! > withinS) return;
    if (!latch.open) {
      this.skips = Math.max(0, opensAt - fresh);
      this.teethBefore = log.count - 1;
    }
    this.skips += fresh;
    const turns = (log.count - this.teethBefore) / pulsesPerTurn;
    const evidence = {
      ...this.worstKind(),
      skips: this.skips,
      skipsPerTurn: this.skips / Math.max(turns, 1),
    };
    latch.raise(
      {
        code: 'illegal-state',
        channel: null,
        from: lately[0]!,
        severity: evidence.skipsPerTurn >= faultPerTurn ? 'fault' : 'warn',
        outcome: 'found',
        at: Number.isNaN(this.firstS) ? nowS : this.firstS,
        evidence,
        ...wordsFor('illegal-state', null, evidence),
        causedBy: null,
      },
      nowS,
    );
  }

  /**
   * Reads what happened since the last tick, the kinds of skips with it.
   * @returns skips, and states that were passed far too fast and that the motion took in good faith.
   */
  private readBack(walk: EdgeWalk, table: StepTable): number {
    const { kinds, lastTickS } = this;
    const { log } = this.context.paths[this.context.primary]!;
    const toothS = shortestTooth(log);
    const rushedS = (rushed * toothS) / table.stepsPerCycle;
    let skips = 0;
    let beforeS = NaN;
    let laneBefore = -1;
    this.firstS = NaN;
    if (!this.latches[0]!.open) kinds.fill(0);
    walk.start(lastTickS - Math.min(1, Number.isNaN(toothS) ? 0.01 : 2 * toothS));
    while (walk.advance()) {
      const { stateBefore, cameTo } = walk.tracker;
      const isFast = walk.lane !== laneBefore && walk.atS - beforeS < rushedS && !this.isAlwaysNarrow();
      beforeS = walk.atS;
      laneBefore = walk.lane;
      if (walk.atS <= lastTickS || (!walk.isIllegal && !isFast)) continue;
      skips++;
      if (Number.isNaN(this.firstS)) this.firstS = walk.atS;
      if (!walk.isIllegal || stateBefore < 0) continue;
      const kind = stateBefore * table.states + cameTo;
      kinds[kind] = kinds[kind]! + 1;
    }
    return skips;
  }

  /** Channels that stand nearly in phase always pass a state fast: a matter of their places. */
  private isAlwaysNarrow(): boolean {
    const { context, table } = this;
    const phases = lanePhases(context, wholeTurns(context.rig.wheel), -Infinity);
    if (!phases || !table) return false;
    const widths = ringWidths(phases, table.weights);
    return table.order.some((state) => widths[state]! < 180 / table.stepsPerCycle);
  }

  private worstKind(): Record<string, string> {
    const { kinds, table } = this;
    if (!table) return {};
    // A state that the ring does not have says more than the jump out of it.
    const weight = (k: number) => kinds[k]! * (table.places[k % table.states]! < 0 ? 2 : 1);
    let worst = 0;
    for (let k = 1; k < kinds.length; k++) if (weight(k) > weight(worst)) worst = k;
    if (kinds[worst] === 0) return {};
    return {
      fromState: stateWord(Math.floor(worst / table.states), table.weights),
      toState: stateWord(worst % table.states, table.weights),
    };
  }
}

/** Of the last few; NaN where there are too few to say. */
function shortestTooth({ riseS, mask, count, unbrokenFrom }: ToothLog): number {
  if (count - unbrokenFrom <= teethNeeded) return NaN;
  let least = Infinity;
  for (let k = count - teethNeeded; k < count; k++)
    least = Math.min(least, riseS[k & mask]! - riseS[(k - 1) & mask]!);
  return least;
}
