/**
 * How often a counted tooth came far too soon: bounce, ringing and noise on a flank make short intervals beside whole
 * ones. What is counted is the step back up, from a short interval to one several times as long: a wheel that turns
 * does not do that, and one that starts does the opposite.
 */
export type IntervalMeter = {
  counted: number;
  /** Intervals that were short beside the next one. */
  short: number;
  shortestS: number;
  /** A whole tooth beside a short interval, s. */
  toothS: number;
  /** Instant of the last edge that came too soon, s. */
  lastShortT: number;
  previousS: number;
};

/** An interval at least so many times the one before tells that the one before was short. */
const stepUp = 4;

export function createIntervalMeter(): IntervalMeter {
  return { counted: 0, short: 0, shortestS: Infinity, toothS: NaN, lastShortT: NaN, previousS: NaN };
}

/** The interval of `intervalS` that a tooth at `t` closes, on a wheel that lacks `missing` teeth in a row. */
export function noteInterval(meter: IntervalMeter, intervalS: number, t: number, missing: number): void {
  // The delay that is taken off may change between two edges, more than bounce lies apart.
  if (!(intervalS > 0)) return;
  meter.counted++;
  // The wheel's own gap is longer by the missing teeth.
  if (intervalS >= stepUp * (missing + 1) * meter.previousS) {
    meter.short++;
    meter.toothS = intervalS;
    meter.lastShortT = t - intervalS;
    if (meter.previousS < meter.shortestS) meter.shortestS = meter.previousS;
  }
  meter.previousS = intervalS;
}

/** Begins to count anew. */
export function restartIntervals(meter: IntervalMeter): void {
  meter.counted = 0;
  meter.short = 0;
  meter.shortestS = Infinity;
}
