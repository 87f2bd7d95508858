/** How many samples are missing between two blocks of a stream. */

/**
 * A board clock cannot move a stream beyond this sample. What sequence numbers alone can add (2^32 blocks of 65,536) stays
 * far below 2^53 on top of it, so that every index is exact.
 */
const maxTimedIndex = 2 ** 50;

type Neighbours = {
  /** The board's clock just after the block before, and at the block after, s; where they carry one. */
  endTimeS: number | undefined;
  nextTimeS: number | undefined;
  rateHz: number;
  /** Where the gap begins on the stream's axis. */
  fromIndex: number;
  missingBlocks: number;
  /** Samples of the block before. */
  lastLength: number;
};

/**
 * By the board's clock where both neighbours carry it, else the missing blocks times the length of the block before. A
 * clock that went backwards, or far beyond all reason, tells nothing.
 */
export function gapLength(between: Neighbours): { lostSamples: number; estimated: boolean } {
  const { endTimeS, nextTimeS, rateHz, fromIndex, missingBlocks, lastLength } = between;
  const timed =
    endTimeS === undefined || nextTimeS === undefined ? NaN : Math.round((nextTimeS - endTimeS) * rateHz) + 0;
  const usable = timed >= 0 && fromIndex + timed <= maxTimedIndex;
  return { lostSamples: usable ? timed : missingBlocks * lastLength, estimated: !usable };
}
