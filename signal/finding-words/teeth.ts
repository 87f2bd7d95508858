/** What is wrong with single edges and teeth, and what usually mends it. */
import { short, time } from '@/signal/finding-words/values';
import type { Wording } from '@/signal/finding-words/values';

export const teethWords = {
  'edge-bounce': (channel, evidence) => ({
    message: `Channel ${channel} counts some teeth more than once: ${short(evidence.shortPercent)} % of its edges follow the one before within a quarter of a tooth, the closest after ${time(evidence.shortestS)}, so the speed reads too high.`,
    remedy:
      'Widen the band or set a hold-off a little longer than the bounce, and look for a loose connector, a weak pull-up or a long unshielded cable.',
  }),
} satisfies Record<string, Wording>;
