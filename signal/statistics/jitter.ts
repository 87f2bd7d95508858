/**
 * Jitter of edges e[k], periods P[k] = e[k+1] - e[k] with the mean Pm.
 *
 *     period jitter          P[k] - Pm
 *     cycle to cycle         P[k+1] - P[k]
 *     time-interval error    e[k] - (t0 + k T0 [+ k^2 b]), all by least squares
 *     over n periods         e[k+n] - e[k] - n Pm
 *
 * White edge noise s makes a period jitter of sqrt(2) s and a cycle-to-cycle jitter of sqrt(6) s. A changing speed reads
 * as jitter: take the trend out first (`withoutTrend`). So does the wheel's own pitch: see `pitch-learning.ts`.
 * Source: the ideas of JESD65B and IEEE Std 2414-2020 as makers of clocks repeat them; the trend is ours.
 */
import { got, notInstants, refused, type Outcome } from '@/signal/statistics/issue';
import { leastSquares } from '@/signal/statistics/least-squares';
import { spreadOf } from '@/signal/statistics/pulse-statistics';

export type PeriodJitter = {
  periods: number;
  meanS: number;
  /** Rms about the mean, divided by the count, and by the count less one (0 for a single period). */
  rmsS: number;
  sampleRmsS: number;
  peakToPeakS: number;
};

/** Issues: too-few (under two edges), not-finite, not-ascending. */
export function periodJitter(edgesS: ArrayLike<number>): Outcome<PeriodJitter> {
  const bad = notInstants(edgesS, 2, 'edge');
  if (bad) return bad;
  const periods = differences(edgesS, 1);
  const { mean, rms, least, most } = spreadOf(periods);
  const n = periods.length;
  return got({
    periods: n,
    meanS: mean,
    rmsS: rms,
    sampleRmsS: n > 1 ? rms * Math.sqrt(n / (n - 1)) : 0,
    peakToPeakS: most - least,
  });
}

/** Largest and rms change from one period to the next. Issues: too-few (under three edges), not-finite, not-ascending. */
export function cycleToCycleJitter(
  edgesS: ArrayLike<number>,
): Outcome<{ pairs: number; mostS: number; rmsS: number }> {
  const bad = notInstants(edgesS, 3, 'edge');
  if (bad) return bad;
  const changes = differences(differences(edgesS, 1), 1);
  let mostS = 0;
  let squares = 0;
  for (const change of changes) {
    mostS = Math.max(mostS, Math.abs(change));
    squares += change * change;
  }
  return got({ pairs: changes.length, mostS, rmsS: Math.sqrt(squares / changes.length) });
}

export type TimeIntervalError = {
  /** Fitted instant of the first edge and fitted first period, s. */
  startS: number;
  periodS: number;
  /** Change of the period from edge to edge, s; 0 for the straight fit. */
  driftS: number;
  errorsS: Float64Array;
  rmsS: number;
  peakToPeakS: number;
};

/**
 * @param fit `even`: the period is one and the same; `drifting`: it changes evenly, as on a ramp of speed.
 * Issues: too-few (one edge more than unknowns is needed), not-finite, not-ascending.
 */
export function timeIntervalError(
  edgesS: ArrayLike<number>,
  fit: 'even' | 'drifting' = 'even',
): Outcome<TimeIntervalError> {
  const unknowns = fit === 'even' ? 2 : 3;
  const bad = notInstants(edgesS, unknowns + 1, 'edge');
  if (bad) return bad;
  const n = edgesS.length;
  const originS = edgesS[0]!;
  const t = Float64Array.from({ length: n }, (_, k) => edgesS[k]! - originS);
  // Edge numbers from -1 to 1 keep the columns of one size, however long the record.
  const half = (n - 1) / 2;
  const z = t.map((_, k) => (k - half) / half);
  const columns = [z.map(() => 1), z, z.map((x) => x * x)].slice(0, unknowns);
  const solved = leastSquares(columns, t);
  if (!solved.ok) return solved;
  const [c0, c1, c2 = 0] = solved.value.x as unknown as [number, number, number?];
  const errorsS = t.map((value, k) => value - (c0 + c1 * z[k]! + c2 * z[k]! * z[k]!));
  const { least, most } = spreadOf(errorsS);
  return got({
    startS: originS + c0 - c1 + c2,
    periodS: (c1 - 2 * c2) / half + c2 / (half * half),
    driftS: (2 * c2) / (half * half),
    errorsS,
    rmsS: Math.sqrt(errorsS.reduce((sum, e) => sum + e * e, 0) / n),
    peakToPeakS: most - least,
  });
}

/** The same edges with an even change of the period taken out; their mean period stays. Issues: as above. */
export function withoutTrend(edgesS: ArrayLike<number>): Outcome<Float64Array> {
  const error = timeIntervalError(edgesS, 'drifting');
  if (!error.ok) return error;
  const last = edgesS.length - 1;
  const meanS = (edgesS[last]! - edgesS[0]!) / last;
  const flat = error.value.errorsS.map((e, k) => edgesS[0]! + k * meanS + e);
  const bad = notInstants(flat, 2, 'edge without its trend');
  return bad ? refused('not-steady', 'the edges leave an even ramp by more than a period') : got(flat);
}

/** Jitter of `jitterS` as a share of the pitch: per cent, and degrees of one tooth (360 a period). */
export function jitterShares(jitterS: number, periodS: number): { percent: number; toothDeg: number } {
  return { percent: (100 * jitterS) / periodS, toothDeg: (360 * jitterS) / periodS };
}

function differences(values: ArrayLike<number>, apart: number): Float64Array {
  return Float64Array.from({ length: values.length - apart }, (_, k) => values[k + apart]! - values[k]!);
}
