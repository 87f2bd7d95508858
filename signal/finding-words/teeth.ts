/** What is wrong with single edges and teeth, and what usually mends it. */
import { short, time } from '@/signal/finding-words/values';
import type { Wording } from '@/signal/finding-words/values';

export const teethWords = {
  'edge-bounce': (channel, evidence) =>
    evidence.heldBackPercent === undefined
      ? {
          message: `Channel ${channel} switches more than once at ${short(evidence.shortPercent)} % of its edges, the closest after ${time(evidence.shortestS)}, so ${
            evidence.counted === 'teeth'
              ? 'teeth are counted twice and the speed reads too high'
              : 'single steps are not to be trusted, though the net count is'
          }.`,
          remedy:
            'Widen the band or set a hold-off a little longer than the bounce, and look for a loose connector, a weak pull-up or a long unshielded cable.',
        }
      : {
          message: `Channel ${channel} bounces at ${short(evidence.heldBackPercent)} % of its edges, and ${
            Number(evidence.holdoffS) > 0 ? 'band and hold-off keep' : 'the band keeps'
          } it back.`,
          remedy:
            'Nothing is counted wrong as it is: leave the band as wide, and look for a loose connector, a weak pull-up or a long unshielded cable.',
        },
} satisfies Record<string, Wording>;
