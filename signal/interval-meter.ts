/**
 * How often a channel switched far too soon after it had switched the same way: bounce, ringing and noise on a flank make
 * short intervals beside whole ones, between rises where the rising flank bounces and between falls where the falling one
 * does. What is counted is the step back up, from a short interval to one several times as long: a wheel that turns does
 * not do that, and one that starts does the opposite.
 */
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

export type IntervalMeter = {
  /** Intervals looked at. */
  counted: number;
  /** Those that were short beside the next one. */
  short: number;
  shortestS: number;
  /** A whole tooth beside a short interval, s. */
  toothS: number;
  /** Instant of the last edge that came too soon, s. */
  lastShortT: number;
  /** The last short intervals by number of their tooth, ascending; what is not filled yet is negative. */
  readonly shortAt: Float64Array;
  /** The next tooth to be looked at. */
  next: number;
};

/** An interval at least so many times the one before tells that the one before was short. */
const stepUp = 4;
/** What bounces does so at many teeth: the last ones of a tick are enough. */
const mostPerTick = 32;
const remembered = 32;

export function createIntervalMeter(): IntervalMeter {
  return {
    counted: 0,
    short: 0,
    shortestS: Infinity,
    toothS: NaN,
    lastShortT: NaN,
    shortAt: new Float64Array(remembered).fill(-1),
    next: 0,
  };
}

/** Takes over what the log has got since the last call, of a wheel that lacks `missing` teeth in a row. */
export function noteIntervals(meter: IntervalMeter, log: ToothLog, missing: number): void {
  const { riseS, fallS, mask } = log;
  // Of the last tooth neither the fall nor the next rise need be there yet.
  const end = log.count - 2;
  const least = stepUp * (missing + 1);
  let k = readableFrom(log, Math.max(meter.next, end - mostPerTick));
  let counted = 0;
  let riseA = 0;
  let fallA = 0;
  let riseB = riseS[k & mask]!;
  let fallB = fallS[k & mask]!;
  let riseC = riseS[(k + 1) & mask]!;
  let fallC = fallS[(k + 1) & mask]!;
  for (; k < end; k++) {
    const c = (k + 2) & mask;
    riseA = riseB;
    fallA = fallB;
    riseB = riseC;
    fallB = fallC;
    riseC = riseS[c]!;
    fallC = fallS[c]!;
    const rises = riseB - riseA;
    // The delay that is taken off may change between two edges, more than bounce lies apart.
    if (!(rises > 0)) continue;
    counted++;
    const falls = fallB - fallA;
    const isRiseShort = riseC - riseB >= least * rises;
    const isFallShort = falls > 0 && fallC - fallB >= least * falls;
    if (!isRiseShort && !isFallShort) continue;
    // Narrow pulses: a bounce of one flank makes a long interval short for the other, but not as short.
    const byFall = isFallShort && !(isRiseShort && rises < falls);
    const shortS = byFall ? falls : rises;
    meter.short++;
    meter.toothS = byFall ? fallC - fallB : riseC - riseB;
    meter.lastShortT = byFall ? fallB : riseB;
    if (shortS < meter.shortestS) meter.shortestS = shortS;
    meter.shortAt.copyWithin(0, 1);
    meter.shortAt[remembered - 1] = k;
  }
  meter.counted += counted;
  meter.next = Math.max(meter.next, end);
}

/**
 * True where the last short intervals come at one to three places of the wheel, the same turn after turn: something on the
 * rim, and no bounce.
 * @param teeth of the wheel in a turn.
 */
export function isAtPlaces(meter: IntervalMeter, teeth: number): boolean {
  const { shortAt } = meter;
  for (let places = 1; places <= Math.min(3, teeth / 4); places++) {
    let told = 0;
    let same = 0;
    for (let i = remembered - 1; i - places >= 0 && shortAt[i - places]! >= 0 && told < 6; i--) {
      told++;
      if (Math.abs(shortAt[i]! - shortAt[i - places]! - (teeth + places)) <= 1) same++;
    }
    if (told >= 2 && same >= 0.8 * told) return true;
  }
  return false;
}

/** Begins to count anew. */
export function restartIntervals(meter: IntervalMeter): void {
  meter.counted = 0;
  meter.short = 0;
  meter.shortestS = Infinity;
}
