import { DeadChannelRule } from '@/signal/findings/dead-channel';
import { DirectionFlipRule } from '@/signal/findings/direction-flip';
import { IllegalStateRule } from '@/signal/findings/illegal-state';
import { InvertedChannelRule } from '@/signal/findings/inverted-channel';
import { NearAliasRule } from '@/signal/findings/near-alias';
import { PhaseErrorRule } from '@/signal/findings/phase-error';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { StandstillChatterRule } from '@/signal/findings/standstill-chatter';
import { RunReference } from '@/signal/findings/unrest';
import type { UnseenTeeth } from '@/signal/findings/unseen-teeth';

/** Rules about channels beside each other, and about what a channel can show at all; the last run is learnt once for all. */
export function ringRules(context: RuleContext, unseen: UnseenTeeth): FindingRule[] {
  const references = context.lanes.map((index) => new RunReference(context, context.paths[index]!));
  return [
    new DeadChannelRule(context, references, unseen),
    new NearAliasRule(context, unseen),
    new InvertedChannelRule(context),
    new PhaseErrorRule(context),
    new IllegalStateRule(context),
    new DirectionFlipRule(context),
    new StandstillChatterRule(context, references),
  ];
}
