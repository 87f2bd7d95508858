/** What is wrong with the wheel, and what usually mends it. */
import type { Wording } from '@/signal/finding-words/values';

export const wheelWords = {} satisfies Record<string, Wording>;
