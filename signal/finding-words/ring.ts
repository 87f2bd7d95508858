/** What is wrong between channels, and what usually mends it. */
import { short, whole } from '@/signal/finding-words/values';
import type { Wording } from '@/signal/finding-words/values';

export const ringWords = {
  'dead-channel': (channel, evidence) =>
    evidence.otherEdges === undefined
      ? {
          message: `Channel ${channel} stands still at ${short(evidence.levelV)} V, at the end of its range, where a working sensor of this kind does not rest.`,
          remedy:
            'Check supply, ground and signal wire of the sensor, and that the input is the one it is wired to.',
        }
      : {
          message: `Channel ${channel} made no edge while channel ${evidence.otherChannel} made ${whole(evidence.otherEdges)}.`,
          remedy:
            'Check the wiring and the supply of this sensor, its distance to the wheel and which pole it faces.',
        },
} satisfies Record<string, Wording>;
