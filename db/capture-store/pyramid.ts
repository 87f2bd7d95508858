/**
 * Minima and maxima of a chunk at three coarsenesses, in the sample type. An entry covers the samples from `k * level`
 * to `(k + 1) * level` of the capture's axis, so that entries of neighbouring chunks fall on one grid; the first and
 * the last entry of a chunk may cover fewer. A level is stored as all minima, then all maxima.
 */
import { newSampleArray, sampleTypeOf } from '../sample-types';
import type { SampleArray } from '@/signal/model';

export const levels = { fine: 64, middle: 512, coarse: 4096 } as const;
export type LevelName = keyof typeof levels;
export type Pyramid = Record<LevelName, SampleArray>;

/** `samples` must not be empty; `startIndex` is that of its first on the capture's axis. */
export function buildPyramid(samples: SampleArray, startIndex: number): Pyramid {
  const fine = reduce(samples, samples, startIndex, samples.length, levels.fine);
  const middle = reduceLevel(fine, startIndex, samples.length, levels.fine, levels.middle);
  const coarse = reduceLevel(middle, startIndex, samples.length, levels.middle, levels.coarse);
  return { fine, middle, coarse };
}

/** How many entries of a level a chunk has. */
function entriesOf(startIndex: number, count: number, level: number): number {
  return Math.floor((startIndex + count - 1) / level) - Math.floor(startIndex / level) + 1;
}

function reduceLevel(
  from: SampleArray,
  startIndex: number,
  count: number,
  fromLevel: number,
  level: number,
): SampleArray {
  const entries = from.length / 2;
  const first = Math.floor(startIndex / fromLevel);
  // Seen in entries of the finer level, the chunk is `entries` long and starts at entry `first`.
  const reduced = reduce(
    from.subarray(0, entries),
    from.subarray(entries),
    first,
    entries,
    level / fromLevel,
  );
  if (reduced.length !== 2 * entriesOf(startIndex, count, level))
    throw new Error('reduceLevel: grids differ');
  return reduced;
}

function reduce(
  minima: SampleArray,
  maxima: SampleArray,
  startIndex: number,
  count: number,
  level: number,
): SampleArray {
  const entries = entriesOf(startIndex, count, level);
  const out = newSampleArray(sampleTypeOf(minima), 2 * entries);
  let i = 0;
  for (let entry = 0; entry < entries; entry++) {
    const end = Math.min(count, (Math.floor(startIndex / level) + entry + 1) * level - startIndex);
    let min = minima[i]!;
    let max = maxima[i]!;
    for (i += 1; i < end; i++) {
      const low = minima[i]!;
      const high = maxima[i]!;
      if (low < min) min = low;
      if (high > max) max = high;
    }
    out[entry] = min;
    out[entries + entry] = max;
  }
  return out;
}
