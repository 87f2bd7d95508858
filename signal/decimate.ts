/**
 * Least and most per column, so that a picture of any length costs as many points as it has pixels.
 *
 * `minMaxColumns` reads samples. `createPyramidLevel` and `coarserLevel` are the building blocks of a pyramid: level 0
 * holds one pair for each `factor` samples, each further level one pair for each `factor` pairs of the one below; the last
 * pair may stand for fewer. Pairs have the samples' own type, so that codes stay codes:
 *
 *     const level = createPyramidLevel(samples, 16);        // { min, max }, ceil(n / 16) pairs
 *     const above = coarserLevel(level, 16);                // ceil(n / 256) pairs
 *     minMaxOfLevel(level, fromPair, toPair, columns, out)  // columns of a drawing from a level
 */
import type { SampleArray } from '@/signal/model';

export type Columns = { min: Float64Array; max: Float64Array };
export type PyramidLevel<T extends SampleArray = SampleArray> = { min: T; max: T };

export const pyramidFactor = 16;

/** Room for the least and most of `count` columns, in the samples' own unit. */
export function createColumns(count: number): Columns {
  return { min: new Float64Array(count), max: new Float64Array(count) };
}

/**
 * Least and most of `samples[from..to)` in `count` columns of equal width, in the samples' own unit. Column k covers the
 * samples from `from + floor(k n / count)` to before `from + floor((k + 1) n / count)`, at least one; so there must be at
 * least as many samples as columns.
 * @throws RangeError where there are fewer.
 */
export function minMaxColumns(
  samples: SampleArray,
  from: number,
  to: number,
  count: number,
  out: Columns,
): void {
  columnsOf(samples, samples, from, to, count, out);
}

/** The same from pairs of a pyramid level: pairs `from` to before `to`. */
export function minMaxOfLevel(
  level: PyramidLevel,
  from: number,
  to: number,
  count: number,
  out: Columns,
): void {
  columnsOf(level.min, level.max, from, to, count, out);
}

function columnsOf(
  lows: SampleArray,
  highs: SampleArray,
  from: number,
  to: number,
  count: number,
  out: Columns,
): void {
  const n = to - from;
  if (count > n) throw new RangeError(`${count} columns want at least as many samples, and there are ${n}`);
  for (let k = 0; k < count; k++) {
    const begin = from + Math.floor((k * n) / count);
    const end = from + Math.floor(((k + 1) * n) / count);
    out.min[k] = least(lows, begin, end);
    out.max[k] = most(highs, begin, end);
  }
}

/** One pair for each `factor` samples. */
export function createPyramidLevel<T extends SampleArray>(samples: T, factor: number): PyramidLevel<T> {
  return reduce(samples, samples, factor);
}

/** One pair for each `factor` pairs of `level`. */
export function coarserLevel<T extends SampleArray>(level: PyramidLevel<T>, factor: number): PyramidLevel<T> {
  return reduce(level.min, level.max, factor);
}

function reduce<T extends SampleArray>(lows: T, highs: T, factor: number): PyramidLevel<T> {
  const pairs = Math.ceil(lows.length / factor);
  const min = blank(lows, pairs);
  const max = blank(highs, pairs);
  for (let k = 0; k < pairs; k++) {
    const begin = k * factor;
    const end = Math.min(lows.length, begin + factor);
    min[k] = least(lows, begin, end);
    max[k] = most(highs, begin, end);
  }
  return { min, max };
}

function blank<T extends SampleArray>(like: T, length: number): T {
  const make = like.constructor as new (length: number) => T;
  return new make(length);
}

function least(array: SampleArray, begin: number, end: number): number {
  if (array instanceof Int16Array) return leastInt16(array, begin, end);
  if (array instanceof Uint16Array) return leastUint16(array, begin, end);
  if (array instanceof Float64Array) return leastFloat64(array, begin, end);
  if (array instanceof Float32Array) return leastFloat32(array, begin, end);
  return leastOther(array, begin, end);
}

function most(array: SampleArray, begin: number, end: number): number {
  if (array instanceof Int16Array) return mostInt16(array, begin, end);
  if (array instanceof Uint16Array) return mostUint16(array, begin, end);
  if (array instanceof Float64Array) return mostFloat64(array, begin, end);
  if (array instanceof Float32Array) return mostFloat32(array, begin, end);
  return mostOther(array, begin, end);
}

// A comparison of noisy samples is mispredicted half the time; for 16 bits the sign of the difference does it without.
function leastInt16(a: Int16Array, begin: number, end: number): number {
  let low = a[begin]!;
  for (let i = begin + 1; i < end; i++) {
    const d = (a[i]! - low) | 0;
    low += d & (d >> 31);
  }
  return low;
}

function mostInt16(a: Int16Array, begin: number, end: number): number {
  let high = a[begin]!;
  for (let i = begin + 1; i < end; i++) {
    const d = (high - a[i]!) | 0;
    high -= d & (d >> 31);
  }
  return high;
}

function leastUint16(a: Uint16Array, begin: number, end: number): number {
  let low = a[begin]!;
  for (let i = begin + 1; i < end; i++) {
    const d = (a[i]! - low) | 0;
    low += d & (d >> 31);
  }
  return low;
}

function mostUint16(a: Uint16Array, begin: number, end: number): number {
  let high = a[begin]!;
  for (let i = begin + 1; i < end; i++) {
    const d = (high - a[i]!) | 0;
    high -= d & (d >> 31);
  }
  return high;
}

function leastFloat64(a: Float64Array, begin: number, end: number): number {
  let low = a[begin]!;
  for (let i = begin + 1; i < end; i++) if (a[i]! < low) low = a[i]!;
  return low;
}

function mostFloat64(a: Float64Array, begin: number, end: number): number {
  let high = a[begin]!;
  for (let i = begin + 1; i < end; i++) if (a[i]! > high) high = a[i]!;
  return high;
}

function leastFloat32(a: Float32Array, begin: number, end: number): number {
  let low = a[begin]!;
  for (let i = begin + 1; i < end; i++) if (a[i]! < low) low = a[i]!;
  return low;
}

function mostFloat32(a: Float32Array, begin: number, end: number): number {
  let high = a[begin]!;
  for (let i = begin + 1; i < end; i++) if (a[i]! > high) high = a[i]!;
  return high;
}

function leastOther(a: SampleArray, begin: number, end: number): number {
  let low = a[begin]!;
  for (let i = begin + 1; i < end; i++) if (a[i]! < low) low = a[i]!;
  return low;
}

function mostOther(a: SampleArray, begin: number, end: number): number {
  let high = a[begin]!;
  for (let i = begin + 1; i < end; i++) if (a[i]! > high) high = a[i]!;
  return high;
}
