/**
 * Several channels of equal length in one blob: channel after channel, each in its own type. `layout` is JSON,
 * `[[name, type], ...]` in the blob's order.
 */
import { bytesOf, bytesPerSample, samplesAt, sampleTypeOf } from './sample-types';
import type { SampleType } from './sample-types';
import type { SampleArray } from '@/signal/model';

export type PlanarChannel = { name: string; samples: SampleArray };

export function layoutOf(channels: readonly PlanarChannel[]): string {
  return JSON.stringify(channels.map((c) => [c.name, sampleTypeOf(c.samples)]));
}

/** Packs into memory of its own that the next `pack` overwrites: SQLite copies a blob while it is bound. */
export class PlanarPacker {
  #scratch = new Uint8Array(64 * 1024);

  /** All channels must hold `count` samples. */
  pack(channels: readonly PlanarChannel[], count: number): Uint8Array {
    let total = 0;
    for (const { name, samples } of channels) {
      if (samples.length !== count) {
        throw new RangeError(`pack: channel "${name}" holds ${samples.length} samples, wanted ${count}`);
      }
      total += samples.byteLength;
    }
    if (this.#scratch.length < total) this.#scratch = new Uint8Array(total);
    let offset = 0;
    for (const { samples } of channels) {
      this.#scratch.set(bytesOf(samples), offset);
      offset += samples.byteLength;
    }
    return this.#scratch.subarray(0, total);
  }
}

/** The channels of a blob of `count` samples each, cut to samples `from` to `to` (exclusive). */
export function unpackPlanar(
  blob: Uint8Array,
  layout: string,
  count: number,
  from = 0,
  to = count,
): PlanarChannel[] {
  let offset = 0;
  return (JSON.parse(layout) as [string, SampleType][]).map(([name, type]) => {
    const samples = samplesAt(blob, offset, type, count);
    offset += count * bytesPerSample(type);
    return { name, samples: from === 0 && to === count ? samples : samples.subarray(from, to) };
  });
}
