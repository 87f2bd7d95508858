/** What is wrong with the wheel, and what usually mends it. */
import { short, time, whole } from '@/signal/finding-words/values';
import type { Evidence, Wording } from '@/signal/finding-words/values';

/** A tooth has a number only where a gap gives it one. */
function tooth({ position, positions, numbering }: Evidence): string {
  return numbering === 'relative'
    ? `One tooth in ${whole(positions)}`
    : `Tooth ${whole(position)} of ${whole(positions)} (0 is the first after the gap)`;
}

export const wheelWords = {
  'missing-tooth': (channel, evidence) => ({
    message: `${tooth(evidence)} did not show on channel ${channel} in ${whole(evidence.turnsMissed)} turns.`,
    remedy:
      evidence.numbering === 'fixed since it went missing'
        ? 'Look at both gaps of the wheel: one of them is a tooth that is damaged, weak or dirty, or the number of missing teeth is not set as the wheel is made.'
        : 'Look at that tooth for damage or dirt, narrow the air gap, or lower the operate point; where the wheel is made so, set its missing teeth.',
  }),
  'extra-pulse': (channel, evidence) => ({
    message:
      evidence.where === 'anywhere'
        ? `Channel ${channel} counted ${whole(evidence.pulses)} pulses between teeth in ${time(evidence.windowS)}, at no fixed place of the wheel.`
        : `Channel ${channel} counts a pulse that is no tooth, turn after turn ${place(evidence)}, so the speed reads too high.`,
    remedy:
      evidence.where === 'anywhere'
        ? 'Look for chips on the wheel and for spikes on the cable (ground, shield, a switched load beside it), or set a hold-off a little below half a tooth.'
        : 'Look there for a burr, a scratch, a screw head or a second magnet, raise the operate point above it, or widen the air gap.',
  }),
} satisfies Record<string, Wording>;

function place({ where, places, afterPosition, pitchPercent, positions, numbering }: Evidence): string {
  if (where === 'several places') return `at ${whole(places)} places of the wheel`;
  const share = `${short(Number(Number(pitchPercent).toFixed(0)))} % of the way to the next`;
  return numbering === 'relative'
    ? `behind one and the same tooth of ${whole(positions)} (${share})`
    : `behind tooth ${whole(afterPosition)} (${share})`;
}
