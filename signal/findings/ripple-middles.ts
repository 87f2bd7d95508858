/**
 * What the middles of the teeth of two channels do together, for ripple that is slower than the teeth: there the wheel's
 * own low orders are in phase on both channels, so that only what differs from the turn before is taken for ripple.
 */
import type { ChannelPath } from '@/signal/channel-path';
import { firstSince, isEven, usualIntervalS } from '@/signal/findings/tooth-rows';
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

export type CommonMiddles = {
  amplitudeV: number;
  hz: number;
  correlation: number;
  /** Half swings of the middle in the window: a step has none. */
  halfSwings: number;
};

const fewest = 16;
/** Rms of the change from turn to turn over the swing. */
const leastChange = 0.03;
const leastCorrelation = 0.8;
/** Rms of what some of the middles have in common, over the swing, for a closer look. */
const leastMoved = 0.02;
const some = 64;

/** A tooth of the first channel that the second has one beside. */
type Row = {
  /** Places of the wheel since the first one. */
  places: number[];
  timesS: number[];
  /** Middles of both, V. */
  a: number[];
  b: number[];
};

/**
 * @param positions places of one turn. @param fromS begin of the window; one turn more is read.
 * @returns null where too few teeth are known or their row is broken, and where the two do not move together.
 */
export function commonMiddles(
  a: ChannelPath,
  b: ChannelPath,
  positions: number,
  fromS: number,
): CommonMiddles | null {
  const { log } = a;
  const end = log.count - 1;
  if (!moveTogether(log, b.log, firstSince(log, fromS), end)) return null;
  const usualS = usualIntervalS(log, Math.max(readableFrom(log, 0), end - 32), end);
  const first = Math.max(firstSince(log, fromS - 1.2 * positions * usualS), readableFrom(log, 0));
  if (!(end - first >= fewest) || !isEven(log, first, end, usualS)) return null;
  const row = rowOf(log, b.log, first, end, usualS);
  const { places, timesS } = row;
  const now = newPair();
  const changes = newPair();
  let before = 0;
  for (let i = 0; i < places.length; i++) {
    while (places[before]! < places[i]! - positions) before++;
    if (timesS[i]! < fromS) continue;
    add(now, row.a[i]!, row.b[i]!);
    if (places[before]! === places[i]! - positions)
      add(changes, row.a[i]! - row.a[before]!, row.b[i]! - row.b[before]!);
  }
  if (changes.n < fewest) return null;
  const last = (end - 1) & log.mask;
  const swingV = log.peakV[last]! - log.troughV[last]!;
  const together = covariance(changes);
  const correlation = together / Math.sqrt(varianceX(changes) * varianceY(changes));
  if (!(correlation > leastCorrelation) || !(Math.sqrt(together) > leastChange * swingV)) return null;
  const amplitudeV = Math.sqrt(2 * Math.max(0, covariance(now)));
  const { crossings, spanS } = crossingsOf(row, fromS, now.x / now.n, amplitudeV / 4);
  return { amplitudeV, hz: crossings / (2 * spanS), correlation, halfSwings: crossings };
}

/** A quick look at some teeth of the window, as if none were missing: whether there is anything to look for. */
function moveTogether(a: ToothLog, b: ToothLog, first: number, end: number): boolean {
  const step = Math.max(1, Math.floor((end - first) / some));
  const shift = b.count - a.count;
  const oldest = Math.max(first, readableFrom(b, 0) - shift);
  const pair = newPair();
  for (let n = end - 1; n >= oldest && pair.n < some; n -= step) {
    const i = n & a.mask;
    const k = (n + shift) & b.mask;
    add(pair, a.peakV[i]! + a.troughV[i]!, b.peakV[k]! + b.troughV[k]!);
  }
  const i = (end - 1) & a.mask;
  return Math.sqrt(covariance(pair)) / 2 > leastMoved * (a.peakV[i]! - a.troughV[i]!);
}

/** The teeth `first` up to, not with, `end` of one channel, with the nearest ones of the other. */
function rowOf(a: ToothLog, b: ToothLog, first: number, end: number, usualS: number): Row {
  const row: Row = { places: [], timesS: [], a: [], b: [] };
  const startS = a.riseS[first & a.mask]!;
  let other = firstSince(b, startS - usualS / 2);
  let place = 0;
  let beforeS = startS;
  for (let n = first; n < end; n++) {
    const riseS = a.riseS[n & a.mask]!;
    place += Math.round((riseS - beforeS) / usualS);
    beforeS = riseS;
    while (other < b.count - 1 && b.riseS[other & b.mask]! < riseS - usualS / 2) other++;
    if (other >= b.count - 1) break;
    if (b.riseS[other & b.mask]! > riseS + usualS / 2) continue;
    row.places.push(place);
    row.timesS.push(riseS);
    row.a.push((a.peakV[n & a.mask]! + a.troughV[n & a.mask]!) / 2);
    row.b.push((b.peakV[other & b.mask]! + b.troughV[other & b.mask]!) / 2);
  }
  return row;
}

/** How often the middle goes through its mean, to `beyondV` on either side, since `fromS`. */
function crossingsOf({ timesS, a }: Row, fromS: number, meanV: number, beyondV: number) {
  let crossings = 0;
  let side = 0;
  for (let i = 0; i < a.length; i++) {
    const off = a[i]! - meanV;
    if (timesS[i]! < fromS || Math.abs(off) < beyondV || Math.sign(off) === side) continue;
    if (side !== 0) crossings++;
    side = Math.sign(off);
  }
  return { crossings, spanS: timesS.at(-1)! - Math.max(fromS, timesS[0]!) };
}

/** Sums of a pair of values. */
type Pair = { n: number; x: number; y: number; xx: number; yy: number; xy: number };

function newPair(): Pair {
  return { n: 0, x: 0, y: 0, xx: 0, yy: 0, xy: 0 };
}

function add(pair: Pair, x: number, y: number): void {
  pair.n++;
  pair.x += x;
  pair.y += y;
  pair.xx += x * x;
  pair.yy += y * y;
  pair.xy += x * y;
}

function covariance({ n, x, y, xy }: Pair): number {
  return xy / n - (x / n) * (y / n);
}

function varianceX({ n, x, xx }: Pair): number {
  return xx / n - (x / n) ** 2;
}

function varianceY({ n, y, yy }: Pair): number {
  return yy / n - (y / n) ** 2;
}
