import { newSampleArray, sampleTypeOf } from '../sample-types';
import type { SampleType } from '../sample-types';
import type { SampleArray } from '@/signal/model';

export const chunkSamples = 65_536;

/** A contiguous run of samples; all channels hold `count`. */
export type Piece = {
  startIndex: number;
  count: number;
  channels: readonly { name: string; samples: SampleArray }[];
};
/** Arrays in the order of the cutter's channels. */
export type Cut = { startIndex: number; count: number; arrays: SampleArray[] };

/**
 * Cuts a run of pieces into chunks that begin and end at multiples of `chunkSamples` of the capture's axis, at gaps, at
 * `splitAt`, and where a channel's sample type changes. All channels are cut alike.
 */
export class ChunkCutter {
  readonly #channels: readonly string[];
  readonly #splitAt: readonly number[];
  /** Stretches without samples, `[from, to)`, in order. */
  readonly holes: { from: number; to: number }[] = [];
  #position = 0;
  #types: SampleType[] = [];
  #open: { startIndex: number; capacity: number; arrays: SampleArray[] } | null = null;

  constructor(channels: readonly string[], splitAt: readonly number[]) {
    this.#channels = channels;
    this.#splitAt = [...splitAt].sort((a, b) => a - b);
  }

  /** Where the next sample without a gap belongs. */
  get position(): number {
    return this.#position;
  }

  /** Takes a piece, which must not begin before `position`; yields the chunks that it filled. */
  *push(piece: Piece): Generator<Cut> {
    if (piece.startIndex < this.#position) {
      throw new RangeError(`push: sample ${piece.startIndex} comes after ${this.#position - 1}`);
    }
    const sources = this.#channels.map((name) => {
      const found = piece.channels.find((c) => c.name === name);
      if (found === undefined) throw new Error(`push: channel "${name}" is missing`);
      if (found.samples.length !== piece.count) {
        throw new RangeError(`push: channel "${name}" holds ${found.samples.length}, wanted ${piece.count}`);
      }
      return found.samples;
    });
    if (piece.count === 0) return;
    const types = sources.map(sampleTypeOf);
    if (piece.startIndex > this.#position) {
      yield* this.finish();
      this.holes.push({ from: this.#position, to: piece.startIndex });
      this.#position = piece.startIndex;
    }
    if (types.some((type, i) => type !== this.#types[i])) yield* this.finish();
    this.#types = types;
    let taken = 0;
    while (taken < piece.count) {
      this.#open ??= this.#begin();
      const { startIndex, capacity, arrays } = this.#open;
      const filled = this.#position - startIndex;
      const step = Math.min(piece.count - taken, capacity - filled);
      arrays.forEach((array, i) => array.set(sources[i]!.subarray(taken, taken + step), filled));
      taken += step;
      this.#position += step;
      if (filled + step === capacity) yield* this.finish();
    }
  }

  /** Yields the chunk that is still open, if any. */
  *finish(): Generator<Cut> {
    if (this.#open === null) return;
    const { startIndex, arrays } = this.#open;
    this.#open = null;
    const count = this.#position - startIndex;
    yield { startIndex, count, arrays: arrays.map((a) => (a.length === count ? a : a.slice(0, count))) };
  }

  #begin() {
    const startIndex = this.#position;
    const grid = (Math.floor(startIndex / chunkSamples) + 1) * chunkSamples;
    const split = this.#splitAt.find((at) => at > startIndex) ?? grid;
    const capacity = Math.min(grid, split) - startIndex;
    return { startIndex, capacity, arrays: this.#types.map((type) => newSampleArray(type, capacity)) };
  }
}
