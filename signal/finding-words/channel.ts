/** What is wrong with the signal of one channel, and what usually mends it. */
import { short } from '@/signal/finding-words/values';
import type { Wording } from '@/signal/finding-words/values';

export const channelWords = {
  clipping: (channel, evidence) => ({
    message: `Channel ${channel} stands at the ${evidence.rail} end of its range for ${short(evidence.railPercent)} % of the time, so its peaks are cut off.`,
    remedy: 'Widen the air gap, take a less sensitive sensor, or put an attenuator before the input.',
  }),
  'offset-drift': (channel, evidence) => ({
    message: `The middle of channel ${channel} has moved by ${short(evidence.movedV)} V since the stream began, to ${short(evidence.middleV)} V; that is ${short(evidence.movedPercentOfSwing)} % of its swing.`,
    remedy:
      'Let the fitted band follow it or take it away with a high pass, and look for heat, a slipped magnet or bracket, and a supply that the converter does not share.',
  }),
  'duty-shift': (channel, evidence) =>
    evidence.usualDuty === undefined
      ? {
          message: `Channel ${channel} is high for ${percent(evidence.duty)} of each period, where a latch before equal poles is high for about half of it.`,
          remedy:
            'Check that the sensor is a latch, that it faces poles of both kinds, and that nothing magnetic stands beside it.',
        }
      : {
          message: `Channel ${channel} is high for ${percent(evidence.duty)} of each period instead of the ${percent(evidence.usualDuty)} that were usual at this speed.`,
          remedy:
            'Look for a gap that has changed, a magnet or iron that came near the sensor, and a threshold that drifts with heat.',
        },
} satisfies Record<string, Wording>;

/** "43.6 %" of a share. */
function percent(share: number | string | undefined): string {
  return typeof share === 'number' ? `${short(100 * share)} %` : String(share);
}
