/**
 * What the middles of the teeth of two channels do together, for ripple that is slower than the teeth: there the wheel's
 * own low orders are in phase on both channels, so that only what differs from turn to turn is taken for ripple.
 */
import type { ChannelPath } from '@/signal/channel-path';
import { firstSince, usualIntervalS } from '@/signal/findings/tooth-rows';
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
/** So few intervals may be of another length. */
const oddShare = 0.1;
/** With so many turns in the window each place has a mean of its own. */
const fewestTurns = 3;
/** Rms of the change from turn to turn, or from the mean of the turns, over the swing. */
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
  if (!(end - first >= fewest)) return null;
  const row = rowOf(log, b.log, first, end);
  if (!row) return null;
  const { places, timesS } = row;
  const now = newPair();
  const begin = timesS.findIndex((t) => t >= fromS);
  if (begin < 0) return null;
  for (let i = begin; i < places.length; i++) add(now, row.a[i]!, row.b[i]!);
  const turns = (places.at(-1)! - places[begin]!) / positions;
  const changes =
    turns < fewestTurns ? fromTurnBefore(row, begin, positions) : fromOwnMean(row, begin, positions);
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

/** Each middle against that of the same place a turn before: of a ripple nearly in step with the shaft little is left. */
function fromTurnBefore({ places, a, b }: Row, begin: number, positions: number): Pair {
  const changes = newPair();
  let before = 0;
  for (let i = begin; i < places.length; i++) {
    while (places[before]! < places[i]! - positions) before++;
    if (places[before]! === places[i]! - positions) add(changes, a[i]! - a[before]!, b[i]! - b[before]!);
  }
  return changes;
}

/** Each middle against the mean of its place over all turns of the window: slow ripple of a fast wheel shows too. */
function fromOwnMean({ places, a, b }: Row, begin: number, positions: number): Pair {
  const sumA = new Float64Array(positions);
  const sumB = new Float64Array(positions);
  const seen = new Float64Array(positions);
  for (let i = begin; i < places.length; i++) {
    const at = places[i]! % positions;
    sumA[at] = sumA[at]! + a[i]!;
    sumB[at] = sumB[at]! + b[i]!;
    seen[at] = seen[at]! + 1;
  }
  const changes = newPair();
  for (let i = begin; i < places.length; i++) {
    const at = places[i]! % positions;
    if (seen[at]! > 1) add(changes, a[i]! - sumA[at]! / seen[at]!, b[i]! - sumB[at]! / seen[at]!);
  }
  return changes;
}

/** A quick look at some teeth of the window and those that follow on the other channel: is there anything to look for? */
function moveTogether(a: ToothLog, b: ToothLog, first: number, end: number): boolean {
  const step = Math.max(1, Math.floor((end - first) / some));
  const pair = newPair();
  for (let n = end - 2; n >= first && pair.n < some; n -= step) {
    const i = n & a.mask;
    const other = firstSince(b, a.riseS[i]!);
    if (other >= b.count - 1) continue;
    const k = other & b.mask;
    add(pair, a.peakV[i]! + a.troughV[i]!, b.peakV[k]! + b.troughV[k]!);
  }
  const i = (end - 1) & a.mask;
  return Math.sqrt(covariance(pair)) / 2 > leastMoved * (a.peakV[i]! - a.troughV[i]!);
}

/**
 * The teeth `first` up to, not with, `end` of one channel, with the nearest ones of the other. Each interval is held against
 * those right before it, so that the speed may change.
 * @returns null where too many are no whole multiples.
 */
function rowOf(a: ToothLog, b: ToothLog, first: number, end: number): Row | null {
  const row: Row = { places: [], timesS: [], a: [], b: [] };
  const startS = a.riseS[first & a.mask]!;
  let usualS = usualIntervalS(a, first, Math.min(end, first + 32));
  let other = firstSince(b, startS - usualS / 2);
  let place = 0;
  let odd = 0;
  let beforeS = startS;
  for (let n = first; n < end; n++) {
    const riseS = a.riseS[n & a.mask]!;
    const passed = (riseS - beforeS) / usualS;
    const whole = Math.round(passed);
    place += whole;
    if (n > first && (whole < 1 || Math.abs(passed - whole) > 0.25)) odd++;
    else if (n > first) usualS += ((riseS - beforeS) / whole - usualS) / 4;
    beforeS = riseS;
    while (other < b.count - 1 && b.riseS[other & b.mask]! < riseS - usualS / 2) other++;
    if (other >= b.count - 1) break;
    if (b.riseS[other & b.mask]! > riseS + usualS / 2) continue;
    row.places.push(place);
    row.timesS.push(riseS);
    row.a.push((a.peakV[n & a.mask]! + a.troughV[n & a.mask]!) / 2);
    row.b.push((b.peakV[other & b.mask]! + b.troughV[other & b.mask]!) / 2);
  }
  return odd <= oddShare * (end - first) ? row : null;
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
