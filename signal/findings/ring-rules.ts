import { PhaseErrorRule } from '@/signal/findings/phase-error';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';

/** Rules about channels beside each other, and about what a channel can show at all. */
export function ringRules(context: RuleContext): FindingRule[] {
  return [new PhaseErrorRule(context)];
}
