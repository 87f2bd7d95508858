/**
 * The count at each tooth of the first channel, as a ring in order of time: what an index pulse, which may be found much
 * later than it came, is held against. Tooth `n` is at `n & mask` and can be read while `n >= teeth - length`.
 */
export type IndexCounts = {
  /** Teeth so far. */
  teeth: number;
  readonly length: number;
  readonly mask: number;
  /** Mid crossing, raw axis, s. */
  readonly t: Float64Array;
  /** The arrangement's own count: steps of the ring, else pulses. */
  readonly counts: Float64Array;
};

const shortest = 512;
const longest = 16_384;

/** Four turns are kept. */
export function createIndexCounts(teethPerTurn: number): IndexCounts {
  const length = 2 ** Math.ceil(Math.log2(Math.min(longest, Math.max(shortest, 4 * teethPerTurn))));
  return {
    teeth: 0,
    length,
    mask: length - 1,
    t: new Float64Array(length).fill(NaN),
    counts: new Float64Array(length),
  };
}
