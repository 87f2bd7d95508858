/**
 * Pulses from the instants at which the middle of the swing is crossed: pulse duration (middle to middle of one high
 * state), pulse separation (of one low state), period (rise to rise) and duty factor, the duration over the period.
 * Source: terms of IEEE Std 181-2011.
 */
import { got, notInstants, refused, type Outcome } from '@/signal/statistics/issue';

export type Spread = { mean: number; least: number; most: number; rms: number };

export type PulseStatistics = {
  /** Whole periods, rise to rise. */
  count: number;
  /** One a period: its start, its high part and its length, s, and their ratio. */
  startS: Float64Array;
  durationS: Float64Array;
  periodS: Float64Array;
  dutyFactor: Float64Array;
  duration: Spread;
  separation: Spread;
  period: Spread;
  duty: Spread;
  /**
   * Duty of the whole record, high time over time: what an uneven wheel or a changing speed leaves right, where the mean
   * of `dutyFactor` would weigh short and long periods alike.
   */
  overallDuty: number;
};

/** Mean, least, most and rms deviation (divided by the count) of a column; NaN-free for one value or more. */
export function spreadOf(values: ArrayLike<number>): Spread {
  let sum = 0;
  let least = Infinity;
  let most = -Infinity;
  for (let i = 0; i < values.length; i++) {
    sum += values[i]!;
    least = Math.min(least, values[i]!);
    most = Math.max(most, values[i]!);
  }
  const mean = sum / values.length;
  let squares = 0;
  for (let i = 0; i < values.length; i++) squares += (values[i]! - mean) ** 2;
  return { mean, least, most, rms: Math.sqrt(squares / values.length) };
}

/**
 * @param midS mid crossings of one channel, s, rising.
 * @param rising polarity of each: true (or not 0) for a rise. Must alternate: where one is lost, call for each part.
 * Issues: bad-setting (lengths differ, polarity does not alternate), too-few (no whole period), not-finite,
 * not-ascending.
 */
export function pulseStatistics(
  midS: ArrayLike<number>,
  rising: ArrayLike<number | boolean>,
): Outcome<PulseStatistics> {
  if (midS.length !== rising.length)
    return refused('bad-setting', `${midS.length} instants, ${rising.length} polarities`);
  const bad = notInstants(midS, 3, 'edge');
  if (bad) return bad;
  for (let i = 1; i < rising.length; i++) {
    if (Boolean(rising[i]) === Boolean(rising[i - 1]))
      return refused('bad-setting', `edge ${i} has the polarity of the one before`);
  }
  const first = rising[0] ? 0 : 1;
  const count = Math.floor((midS.length - 1 - first) / 2);
  if (count < 1) return refused('too-few', 'no whole period from rise to rise');
  const startS = new Float64Array(count);
  const durationS = new Float64Array(count);
  const periodS = new Float64Array(count);
  for (let k = 0; k < count; k++) {
    const i = first + 2 * k;
    startS[k] = midS[i]!;
    durationS[k] = midS[i + 1]! - midS[i]!;
    periodS[k] = midS[i + 2]! - midS[i]!;
  }
  const dutyFactor = durationS.map((high, k) => high / periodS[k]!);
  const duration = spreadOf(durationS);
  const period = spreadOf(periodS);
  return got({
    count,
    startS,
    durationS,
    periodS,
    dutyFactor,
    duration,
    separation: spreadOf(periodS.map((whole, k) => whole - durationS[k]!)),
    period,
    duty: spreadOf(dutyFactor),
    overallDuty: duration.mean / period.mean,
  });
}
