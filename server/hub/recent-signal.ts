/**
 * The newest samples of one channel, for drawing: a ring in the type in which they came, on the stream's sample axis.
 * Gaps are not filled: an index in a gap, or older than the ring, has no sample.
 */
import type { SampleArray } from '@/signal/model';

export type Columns = { min: (number | null)[]; max: (number | null)[] };
export type Scaling = { voltsPerCode: number; codeOffset: number };

const firstRing = 4096;

type Stretch = { fromIndex: number; toIndex: number; ringAt: number };

function like(samples: SampleArray, length: number): SampleArray {
  const Kind = samples.constructor as new (length: number) => SampleArray;
  return new Kind(length);
}

export class RecentSignal {
  #ring: SampleArray | undefined;
  #written = 0;
  /** Runs without a gap, oldest first; few, since gaps are rare. */
  #stretches: Stretch[] = [];

  constructor(
    private readonly capacity: number,
    private scaling: Scaling,
  ) {}

  /** The channel's setup has changed: it holds for what is drawn from now on, older samples included. */
  rescale({ voltsPerCode, codeOffset }: Scaling): void {
    this.scaling = { voltsPerCode, codeOffset };
  }

  append(startIndex: number, samples: SampleArray): void {
    const ring = this.#roomFor(samples);
    const last = this.#stretches[this.#stretches.length - 1];
    if (last !== undefined && last.toIndex === startIndex) last.toIndex += samples.length;
    else {
      this.#stretches.push({
        fromIndex: startIndex,
        toIndex: startIndex + samples.length,
        ringAt: this.#written,
      });
    }
    let offset = Math.max(0, samples.length - this.capacity);
    this.#written += offset;
    while (offset < samples.length) {
      const at = this.#written % this.capacity;
      const count = Math.min(samples.length - offset, this.capacity - at);
      ring.set(samples.subarray(offset, offset + count) as never, at);
      offset += count;
      this.#written += count;
    }
    this.#forget();
  }

  /** The ring grows until it has its size: streams that come and go quickly must not cost a whole one each. */
  #roomFor(samples: SampleArray): SampleArray {
    const ring = this.#ring;
    if (ring === undefined || ring.constructor !== samples.constructor) {
      this.#stretches = [];
      this.#written = 0;
      return (this.#ring = like(samples, Math.min(this.capacity, Math.max(firstRing, 2 * samples.length))));
    }
    const wanted = this.#written + samples.length;
    if (ring.length === this.capacity || wanted <= ring.length) return ring;
    const grown = like(samples, Math.min(this.capacity, Math.max(wanted, 2 * ring.length)));
    grown.set(ring.subarray(0, this.#written) as never);
    return (this.#ring = grown);
  }

  #forget(): void {
    const oldest = this.#written - this.capacity;
    while (this.#stretches.length > 0) {
      const first = this.#stretches[0] as Stretch;
      const behind = oldest - first.ringAt;
      if (behind <= 0) return;
      if (first.fromIndex + behind >= first.toIndex) this.#stretches.shift();
      else {
        first.fromIndex += behind;
        first.ringAt += behind;
        return;
      }
    }
  }

  /** Oldest index that is still held, or undefined. */
  get oldestIndex(): number | undefined {
    return this.#stretches[0]?.fromIndex;
  }

  /** Copies of the runs without a gap that lie in `fromIndex` to `toIndex` (exclusive), oldest first. */
  read(fromIndex: number, toIndex: number): { startIndex: number; samples: SampleArray }[] {
    const ring = this.#ring;
    if (ring === undefined) return [];
    const runs: { startIndex: number; samples: SampleArray }[] = [];
    for (const stretch of this.#stretches) {
      const from = Math.max(stretch.fromIndex, fromIndex);
      const to = Math.min(stretch.toIndex, toIndex);
      if (to <= from) continue;
      const samples = like(ring, to - from);
      for (let done = 0; done < to - from;) {
        const at = (stretch.ringAt + (from - stretch.fromIndex) + done) % this.capacity;
        const count = Math.min(to - from - done, this.capacity - at);
        samples.set(ring.subarray(at, at + count) as never, done);
        done += count;
      }
      runs.push({ startIndex: from, samples });
    }
    return runs;
  }

  /**
   * Lowest and highest volts of groups of `group` samples, group i from index `firstIndex + i * group` on; null where
   * a group holds no sample.
   */
  columns(
    firstIndex: number,
    group: number,
    count: number,
  ): { min: (number | null)[]; max: (number | null)[] } {
    const min: (number | null)[] = new Array<number | null>(count).fill(null);
    const max: (number | null)[] = new Array<number | null>(count).fill(null);
    const ring = this.#ring;
    if (ring === undefined) return { min, max };
    const coded = !(ring instanceof Float32Array || ring instanceof Float64Array);
    const scale = coded ? this.scaling.voltsPerCode : 1;
    const offset = coded ? this.scaling.codeOffset : 0;
    for (const stretch of this.#stretches) {
      const from = Math.max(stretch.fromIndex, firstIndex);
      const to = Math.min(stretch.toIndex, firstIndex + group * count);
      let index = from;
      while (index < to) {
        const column = Math.floor((index - firstIndex) / group);
        const end = Math.min(to, firstIndex + (column + 1) * group);
        let low = Infinity;
        let high = -Infinity;
        let at = (stretch.ringAt + (index - stretch.fromIndex)) % this.capacity;
        for (; index < end; index += 1) {
          const value = ring[at] as number;
          if (value < low) low = value;
          if (value > high) high = value;
          at += 1;
          if (at === this.capacity) at = 0;
        }
        const a = (low - offset) * scale;
        const b = (high - offset) * scale;
        const lowV = Math.min(a, b);
        const highV = Math.max(a, b);
        const soFarLow = min[column];
        const soFarHigh = max[column];
        // Two stretches may meet in one column.
        min[column] = soFarLow == null ? roundVolts(lowV) : Math.min(soFarLow, roundVolts(lowV));
        max[column] = soFarHigh == null ? roundVolts(highV) : Math.max(soFarHigh, roundVolts(highV));
      }
    }
    return { min, max };
  }
}

/** 10 microvolts are far below a pixel, and halve the frame. */
export function roundVolts(volts: number): number {
  return Math.abs(volts) < 0.1 ? Math.round(volts * 1e7) / 1e7 : Math.round(volts * 1e5) / 1e5;
}
