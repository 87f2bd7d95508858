/**
 * The newest samples of one channel, for drawing: pieces in the type in which they came, on the stream's sample axis.
 * Gaps are not filled: an index in a gap, or older than what is held, has no sample. Pieces, not one ring, since a ring
 * that grows is copied whole, and a hundred channels that began together would do so at the same instant.
 */
import type { SampleArray } from '@/signal/model';

export type Columns = { min: (number | null)[]; max: (number | null)[] };
export type Scaling = { voltsPerCode: number; codeOffset: number };
export type Run = { startIndex: number; samples: SampleArray };

const pieceSamples = 16_384;

type Piece = { startIndex: number; count: number; samples: SampleArray };

function like(samples: SampleArray, length: number): SampleArray {
  const Kind = samples.constructor as new (length: number) => SampleArray;
  return new Kind(length);
}

export class RecentSignal {
  /** Oldest first; none overlap. */
  #pieces: Piece[] = [];
  #held = 0;
  #spare: SampleArray | undefined;

  /** @param capacity samples that are held at least; at most one piece more is. */
  constructor(
    private readonly capacity: number,
    private scaling: Scaling,
  ) {}

  /** The channel's setup has changed: it holds for what is drawn from now on, older samples included. */
  rescale({ voltsPerCode, codeOffset }: Scaling): void {
    this.scaling = { voltsPerCode, codeOffset };
  }

  append(startIndex: number, samples: SampleArray): void {
    let last = this.#pieces[this.#pieces.length - 1];
    if (last !== undefined && last.samples.constructor !== samples.constructor) {
      this.#pieces = [];
      this.#held = 0;
      this.#spare = last = undefined;
    }
    for (let done = 0; done < samples.length;) {
      const index = startIndex + done;
      if (
        last === undefined ||
        last.startIndex + last.count !== index ||
        last.count === last.samples.length
      ) {
        last = {
          startIndex: index,
          count: 0,
          samples: this.#spare ?? like(samples, Math.min(pieceSamples, this.capacity)),
        };
        this.#spare = undefined;
        this.#pieces.push(last);
      }
      const count = Math.min(samples.length - done, last.samples.length - last.count);
      last.samples.set(samples.subarray(done, done + count) as never, last.count);
      last.count += count;
      this.#held += count;
      done += count;
    }
    this.#forget();
  }

  #forget(): void {
    for (let first = this.#pieces[0]; first !== undefined; first = this.#pieces[0]) {
      if (this.#held - first.count < this.capacity) return;
      this.#held -= first.count;
      this.#spare = first.samples;
      this.#pieces.shift();
    }
  }

  /** Oldest index that is still held, or undefined. */
  get oldestIndex(): number | undefined {
    return this.#pieces[0]?.startIndex;
  }

  /** Copies of the runs without a gap that lie in `fromIndex` to `toIndex` (exclusive), oldest first. */
  read(fromIndex: number, toIndex: number): Run[] {
    const runs: { startIndex: number; parts: SampleArray[]; count: number }[] = [];
    for (const { startIndex, count, samples } of this.#pieces) {
      const from = Math.max(startIndex, fromIndex);
      const to = Math.min(startIndex + count, toIndex);
      if (to <= from) continue;
      const part = samples.subarray(from - startIndex, to - startIndex);
      const run = runs[runs.length - 1];
      if (run !== undefined && run.startIndex + run.count === from) {
        run.parts.push(part);
        run.count += part.length;
      } else runs.push({ startIndex: from, parts: [part], count: part.length });
    }
    return runs.map(({ startIndex, parts, count }) => {
      const samples = like(parts[0] as SampleArray, count);
      let at = 0;
      for (const part of parts) {
        samples.set(part as never, at);
        at += part.length;
      }
      return { startIndex, samples };
    });
  }

  /**
   * Lowest and highest volts of groups of `group` samples, group i from index `firstIndex + i * group` on; null where
   * a group holds no sample.
   */
  columns(firstIndex: number, group: number, count: number): Columns {
    const min: Columns['min'] = new Array<number | null>(count).fill(null);
    const max: Columns['max'] = new Array<number | null>(count).fill(null);
    for (const piece of this.#pieces) {
      const { samples, startIndex } = piece;
      const coded = !(samples instanceof Float32Array || samples instanceof Float64Array);
      const scale = coded ? this.scaling.voltsPerCode : 1;
      const offset = coded ? this.scaling.codeOffset : 0;
      let index = Math.max(startIndex, firstIndex);
      const to = Math.min(startIndex + piece.count, firstIndex + group * count);
      while (index < to) {
        const column = Math.floor((index - firstIndex) / group);
        const end = Math.min(to, firstIndex + (column + 1) * group);
        let low = Infinity;
        let high = -Infinity;
        for (; index < end; index += 1) {
          const value = samples[index - startIndex] as number;
          if (value < low) low = value;
          if (value > high) high = value;
        }
        const a = (low - offset) * scale;
        const b = (high - offset) * scale;
        const lowV = roundVolts(Math.min(a, b));
        const highV = roundVolts(Math.max(a, b));
        const soFarLow = min[column];
        const soFarHigh = max[column];
        // Two pieces may meet in one column.
        min[column] = soFarLow == null ? lowV : Math.min(soFarLow, lowV);
        max[column] = soFarHigh == null ? highV : Math.max(soFarHigh, highV);
      }
    }
    return { min, max };
  }
}

/** 10 microvolts are far below a pixel, and halve the frame. */
export function roundVolts(volts: number): number {
  return Math.abs(volts) < 0.1 ? Math.round(volts * 1e7) / 1e7 : Math.round(volts * 1e5) / 1e5;
}
