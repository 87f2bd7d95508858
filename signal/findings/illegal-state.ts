import { stateWord } from '@/signal/findings/edge-walk';
import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { StateJumps, usualTooth } from '@/signal/findings/state-jumps';
import { hasTinyTeeth } from '@/signal/findings/tiny-teeth';
import { wordsFor } from '@/signal/finding-words';
import { stepTable } from '@/signal/step-table';
import type { StepTable } from '@/signal/step-table';

/** So many skips within the window open it; one in the window keeps it. */
const opensAt = 2;
/** The window: whichever is longer. */
const windowS = 2;
const windowTurns = 3;
const faultPerTurn = 1;

/**
 * The ring of states skipped one, so that the count is not known any more. The motion counts skips that show as such. Lines
 * that jump at once may also be taken for steps in one order or another: the logs tell those, see `state-jumps.ts`.
 */
export class IllegalStateRule implements FindingRule {
  readonly latches = [new FindingLatch(windowS)];
  private readonly context: RuleContext;
  private readonly table: StepTable | null;
  private readonly jumps: StateJumps | null;
  /** Instants of the last skips, s. */
  private readonly lately = new Float64Array(opensAt).fill(-Infinity);
  private seen = 0;
  private disturbances = 0;
  private skips = 0;
  private readonly kinds: Uint32Array;
  private teethBefore = 0;
  /** Skips that the motion saw and that the logs are still to show. */
  private ahead = 0;
  /** The first after lost samples says nothing of the rig. */
  private forgiven = 0;

  constructor(context: RuleContext) {
    this.context = context;
    this.table = stepTable(context.rig.sensing);
    this.jumps = this.table && new StateJumps(context, this.table);
    this.kinds = new Uint32Array(this.table ? this.table.states ** 2 : 0);
  }

  tick(nowS: number): void {
    const { tracker, calm } = this.context.motion;
    if (tracker && this.jumps) {
      const counted = tracker.illegalSteps - this.seen;
      this.jumps.tick(counted !== 0 || calm.disturbances !== this.disturbances);
      this.seen = tracker.illegalSteps;
      this.disturbances = calm.disturbances;
      const fresh = Math.max(counted, this.readJumps(this.jumps) - this.ahead);
      this.ahead = this.jumps.isPending ? Math.max(0, this.ahead + fresh - this.jumps.found.length) : 0;
      if (fresh > this.forgiven && !hasTinyTeeth(this.context)) this.noteSkips(fresh - this.forgiven, nowS);
      this.forgiven = Math.max(0, this.forgiven - fresh);
    }
    this.latches[0]!.rest(nowS);
  }

  gap({ toS }: { toS: number }): void {
    this.lately.fill(-Infinity);
    this.forgiven = 1;
    this.jumps?.forget(toS);
  }

  private noteSkips(fresh: number, nowS: number): void {
    const { context, lately } = this;
    const latch = this.latches[0]!;
    const { log } = context.paths[context.primary]!;
    const { pulsesPerTurn } = context.rig.wheel;
    const seenS = this.instantOf(nowS);
    for (let k = 0; k < Math.min(fresh, opensAt); k++) {
      lately.copyWithin(0, 1);
      lately[opensAt - 1] = seenS;
    }
    const withinS = Math.max(windowS, windowTurns * pulsesPerTurn * usualTooth(log) || 0);
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
        at: seenS,
        evidence,
        ...wordsFor('illegal-state', null, evidence),
        causedBy: null,
      },
      nowS,
    );
  }

  /** Of the first of the skips at hand, as the logs tell it, or of the last that the motion saw, s. */
  private instantOf(nowS: number): number {
    const { tracker } = this.context.motion;
    const [first] = this.jumps?.found ?? [];
    const atS = first ? first.atS : (tracker?.lastIllegalS ?? NaN);
    return Number.isNaN(atS) ? nowS : Math.max(atS, this.lately[opensAt - 1]!);
  }

  /** @returns how many there were; their kinds are kept. */
  private readJumps({ found }: StateJumps): number {
    const { kinds, table } = this;
    if (found.length === 0 || !table) return 0;
    if (!this.latches[0]!.open) kinds.fill(0);
    for (const { from, to } of found) {
      if (from < 0 || to < 0) continue;
      const kind = from * table.states + to;
      kinds[kind] = kinds[kind]! + 1;
    }
    return found.length;
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
