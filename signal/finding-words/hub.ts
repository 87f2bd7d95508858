/** What is wrong on the way from the board, and what usually mends it. */
import { short, whole } from '@/signal/finding-words/values';
import type { Wording } from '@/signal/finding-words/values';

export const hubWords = {
  'lost-samples': (_channel, evidence) => ({
    message: `${whole(evidence.lostSamples)} samples (${short(evidence.lostS)} s) never arrived, so counts and turns are lower bounds from here on.`,
    remedy:
      'Give the board a larger send buffer or a lower sample rate, and look at the link between board and hub.',
  }),
} satisfies Record<string, Wording>;
