import { ClippingRule } from '@/signal/findings/clipping';
import { DeadChannelRule } from '@/signal/findings/dead-channel';
import { EdgeBounceRule } from '@/signal/findings/edge-bounce';
import { LostSamplesRule } from '@/signal/findings/lost-samples';
import { MissingToothRule } from '@/signal/findings/missing-tooth';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';

/** All rules, in the order in which their findings are listed. */
export function createRules(context: RuleContext): FindingRule[] {
  return [
    new LostSamplesRule(),
    new DeadChannelRule(context),
    new ClippingRule(context),
    new EdgeBounceRule(context),
    new MissingToothRule(context),
  ];
}
