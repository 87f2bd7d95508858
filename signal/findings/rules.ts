import { BoardRestartRule } from '@/signal/findings/board-restart';
import { channelRules } from '@/signal/findings/channel-rules';
import { ClockDriftRule } from '@/signal/findings/clock-drift';
import { EdgeBounceRule } from '@/signal/findings/edge-bounce';
import { LostSamplesRule } from '@/signal/findings/lost-samples';
import { ringRules } from '@/signal/findings/ring-rules';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { UnseenTeeth } from '@/signal/findings/unseen-teeth';
import { wheelRules } from '@/signal/findings/wheel-rules';

/** All rules, in the order in which their findings are listed. */
export function createRules(context: RuleContext): FindingRule[] {
  const unseen = new UnseenTeeth(context);
  return [
    unseen,
    // On the way from the board.
    new BoardRestartRule(),
    new LostSamplesRule(),
    new ClockDriftRule(),
    // Between channels.
    ...ringRules(context, unseen),
    // The signal of one channel.
    ...channelRules(context, unseen),
    // Edges.
    new EdgeBounceRule(context),
    // Teeth and the wheel.
    ...wheelRules(context),
  ];
}
