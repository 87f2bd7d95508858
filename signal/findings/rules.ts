import { BoardRestartRule } from '@/signal/findings/board-restart';
import { channelRules } from '@/signal/findings/channel-rules';
import { ClockDriftRule } from '@/signal/findings/clock-drift';
import { DeadChannelRule } from '@/signal/findings/dead-channel';
import { EdgeBounceRule } from '@/signal/findings/edge-bounce';
import { LostSamplesRule } from '@/signal/findings/lost-samples';
import { MissingToothRule } from '@/signal/findings/missing-tooth';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { WheelLanes } from '@/signal/findings/wheel-lanes';

/** All rules, in the order in which their findings are listed. */
export function createRules(context: RuleContext): FindingRule[] {
  const wheels = new WheelLanes(context);
  return [
    // On the way from the board.
    new BoardRestartRule(),
    new LostSamplesRule(),
    new ClockDriftRule(),
    // Between channels.
    new DeadChannelRule(context),
    // The signal of one channel.
    ...channelRules(context),
    // Edges and teeth.
    new EdgeBounceRule(context),
    wheels,
    new MissingToothRule(context, wheels),
    // The wheel.
  ];
}
