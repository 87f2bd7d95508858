/** What is wrong with the signal of one channel, and what usually mends it. */
import { short } from '@/signal/finding-words/values';
import type { Wording } from '@/signal/finding-words/values';

export const channelWords = {
  clipping: (channel, evidence) => ({
    message: `Channel ${channel} stands at the ${evidence.rail} end of its range for ${short(evidence.railPercent)} % of the time, so its peaks are cut off.`,
    remedy: 'Widen the air gap, take a less sensitive sensor, or put an attenuator before the input.',
  }),
} satisfies Record<string, Wording>;
