import { ClippingRule } from '@/signal/findings/clipping';
import { DutyShiftRule } from '@/signal/findings/duty-shift';
import { OffsetDriftRule } from '@/signal/findings/offset-drift';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { SlowEdgeRule } from '@/signal/findings/slow-edge';
import { TurnMeans } from '@/signal/findings/turn-means';

/** Rules about the signal of one channel; what teeth are like on average is read once for all of them. */
export function channelRules(context: RuleContext): FindingRule[] {
  const means = context.paths.map((path) => new TurnMeans(context, path));
  return [
    new ClippingRule(context),
    new OffsetDriftRule(context, means),
    new SlowEdgeRule(context, means),
    new DutyShiftRule(context, means),
  ];
}
