/** All rules of a stream at work: when they are asked, what is open, what has closed, and what follows from what. */
import { causeOf } from '@/signal/findings/causes';
import type { FindingLatch, FindingRule, RuleContext, RuleGap } from '@/signal/findings/rule';
import { createRules } from '@/signal/findings/rules';
import type { Finding } from '@/signal/model';
import type { BoardNote } from '@/signal/pipeline-types';

/** Closed findings are remembered for so long as possible causes, s. */
const rememberedS = 10;

export class FindingsDesk {
  private readonly rules: FindingRule[];
  /** Those of each rule: looked up among so many kinds of rules they cost more than all that is done with them. */
  private readonly latches: (readonly FindingLatch[])[];
  private readonly closed: Finding[];
  private recent: Finding[] = [];

  /** @param closed where findings go that have ended. */
  constructor(context: RuleContext, closed: Finding[]) {
    this.rules = createRules(context);
    this.latches = this.rules.map(({ latches }) => latches);
    this.closed = closed;
  }

  tick(nowS: number): void {
    const { rules } = this;
    for (let r = 0; r < rules.length; r++) rules[r]!.tick(nowS);
    this.settle(nowS);
  }

  gap(gap: RuleGap): void {
    for (const rule of this.rules) rule.gap?.(gap);
    this.settle(gap.toS);
  }

  note(note: BoardNote, nowS: number): void {
    for (const rule of this.rules) rule.note?.(note, nowS);
    this.settle(nowS);
  }

  /** Findings that are open now, in the order of the rules. */
  open(): Finding[] {
    const list: Finding[] = [];
    for (const latches of this.latches) for (const { open } of latches) if (open) list.push(open);
    return list;
  }

  private settle(nowS: number): void {
    let anyOpen = false;
    const lists = this.latches;
    for (let r = 0; r < lists.length; r++) {
      const latches = lists[r]!;
      for (let k = 0; k < latches.length; k++) {
        const { closed, open } = latches[k]!;
        if (open) anyOpen = true;
        if (closed.length === 0) continue;
        this.closed.push(...closed);
        this.recent.push(...closed);
        closed.length = 0;
      }
    }
    if (this.recent.length > 0)
      this.recent = this.recent.filter(({ to }) => nowS - (to ?? nowS) < rememberedS);
    if (anyOpen) this.fold();
  }

  private fold(): void {
    const open = this.open();
    if (open.length + this.recent.length < 2) return;
    for (const finding of open) {
      if (finding.causedBy === null) finding.causedBy = causeOf(finding, [...open, ...this.recent]);
    }
  }
}
