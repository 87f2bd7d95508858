/** Rows of teeth in a log: where one begins, and how regular its intervals are. */
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

/** The first tooth of the unbroken row that began at `fromS` or later; the number of teeth where there is none. */
export function firstSince(log: ToothLog, fromS: number): number {
  let low = readableFrom(log, 0);
  let high = log.count;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (log.riseS[middle & log.mask]! < fromS) low = middle + 1;
    else high = middle;
  }
  return low;
}

function intervalS({ riseS, mask }: ToothLog, n: number): number {
  return riseS[(n + 1) & mask]! - riseS[n & mask]!;
}

/** Intervals within these shares of the usual one are plainly of one place: most of them, which spares a division. */
const plainly = { least: 0.76, most: 1.24 };

/** Positions from one tooth to another, where some of them are empty. */
export function placesBetween(log: ToothLog, first: number, last: number, usualS: number): number {
  const { riseS, mask } = log;
  const leastS = plainly.least * usualS;
  const mostS = plainly.most * usualS;
  let places = 0;
  let startS = riseS[first & mask]!;
  for (let n = first; n < last; n++) {
    const endS = riseS[(n + 1) & mask]!;
    const lengthS = endS - startS;
    startS = endS;
    if (lengthS > leastS && lengthS < mostS) places++;
    else places += Math.max(1, Math.round(lengthS / usualS));
  }
  return places;
}

/** So few intervals may be of another length. */
const oddShare = 0.1;

/** All but a few intervals are whole multiples of the usual one. */
export function isEven(log: ToothLog, first: number, last: number, usualS: number): boolean {
  const { riseS, mask } = log;
  const leastS = plainly.least * usualS;
  const mostS = plainly.most * usualS;
  let odd = 0;
  let startS = riseS[first & mask]!;
  for (let n = first; n < last; n++) {
    const endS = riseS[(n + 1) & mask]!;
    const lengthS = endS - startS;
    startS = endS;
    if (lengthS > leastS && lengthS < mostS) continue;
    const places = lengthS / usualS;
    if (places < 0.5 || Math.abs(places - Math.round(places)) > 0.25) odd++;
  }
  return odd <= oddShare * (last - first);
}

/** All but a few intervals are as they were a turn before. @param turn teeth of one turn. */
export function repeats(log: ToothLog, first: number, last: number, turn: number): boolean {
  if (first - turn < readableFrom(log, 0)) return false;
  const { riseS, mask } = log;
  let odd = 0;
  let startS = riseS[first & mask]!;
  let beforeS = riseS[(first - turn) & mask]!;
  for (let n = first; n < last; n++) {
    const endS = riseS[(n + 1) & mask]!;
    const beforeEndS = riseS[(n + 1 - turn) & mask]!;
    if (Math.abs((endS - startS) / (beforeEndS - beforeS) - 1) > 0.1) odd++;
    startS = endS;
    beforeS = beforeEndS;
  }
  return odd <= oddShare * (last - first);
}

const someIntervals = 15;
const sorted = new Float64Array(someIntervals);

/** The median of some of the intervals, s. */
export function usualIntervalS(log: ToothLog, first: number, last: number): number {
  const some = Math.min(last - first, someIntervals);
  // Sorted as they are put in: for so few the quickest way, and without new arrays.
  for (let i = 0; i < some; i++) {
    const value = intervalS(log, first + Math.floor((i * (last - first)) / some));
    let k = i;
    for (; k > 0 && sorted[k - 1]! > value; k--) sorted[k] = sorted[k - 1]!;
    sorted[k] = value;
  }
  return some > 0 ? sorted[some >> 1]! : NaN;
}

/**
 * Places without a tooth in intervals whose neighbours are of the usual length: a shaft that stops and goes on makes long
 * intervals too, but slows down before them.
 */
export function emptyPlaces(log: ToothLog, first: number, last: number, usualS: number): number {
  let empty = 0;
  for (let n = first; n < last; n++) {
    const places = Math.round(intervalS(log, n) / usualS);
    if (places < 2) continue;
    const before = n > first ? intervalS(log, n - 1) / usualS : 1;
    const after = n + 1 < last ? intervalS(log, n + 1) / usualS : 1;
    if (Math.abs(before - 1) < 0.2 && Math.abs(after - 1) < 0.2) empty += places - 1;
  }
  return empty;
}

const mostKept = 16;
const kept = new Float64Array(mostKept);

/**
 * Whether places without a tooth, counted back from tooth `last`, are where some were a turn before: those of the wheel are,
 * those of a signal that stood for a moment are not. @param positions places of a turn.
 */
export function emptyAgain(log: ToothLog, last: number, usualS: number, positions: number): boolean {
  const oldest = readableFrom(log, 0);
  let place = 0;
  let count = 0;
  let again = 0;
  for (let n = last - 1; n >= oldest && place < 2 * positions; n--) {
    const places = Math.max(1, Math.round(intervalS(log, n) / usualS));
    if (places > 1 && place < positions && count < mostKept) kept[count++] = place;
    if (places > 1 && place >= positions)
      for (let k = 0; k < count; k++) if (Math.abs(place - positions - kept[k]!) < 1) again++;
    place += places;
  }
  return 2 * again > count;
}
