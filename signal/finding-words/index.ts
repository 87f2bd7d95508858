/** All wording of findings: what is wrong, and what usually mends it. One sentence each. */
import { channelWords } from '@/signal/finding-words/channel';
import { hubWords } from '@/signal/finding-words/hub';
import { ringWords } from '@/signal/finding-words/ring';
import { teethWords } from '@/signal/finding-words/teeth';
import type { Evidence, FindingWords, Wording } from '@/signal/finding-words/values';
import { wheelWords } from '@/signal/finding-words/wheel';

const words = { ...hubWords, ...ringWords, ...channelWords, ...teethWords, ...wheelWords };

/** Findings whose rule exists. */
export type WordedCode = keyof typeof words;

/**
 * Message and remedy of a finding.
 * @param channel null where it concerns the whole rig. @param evidence by the names that its rule gives, units in the
 * names; what is missing reads "undefined".
 */
export function wordsFor(code: WordedCode, channel: string | null, evidence: Evidence): FindingWords {
  const wording: Wording = words[code];
  return wording(channel, evidence);
}
