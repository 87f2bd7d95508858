/**
 * Where a wheel without a mark stands: the latest turn's spacing is laid over the stored pattern at each of its N shifts
 * (circular cross-correlation), and the shift that leaves the least is taken, where noise cannot have chosen it: the next
 * best must leave more by eighteen noise variances, a likelihood ratio of exp(9).
 * Source: formula (least squares equals greatest correlation, since shifting does not change a pattern's energy).
 */
import { got, notFinite, refused, type Outcome } from '@/signal/statistics/issue';

export type PatternMatch = {
  /** `latest[k]` is the interval that the store numbers (k + shift) mod N. */
  shift: number;
  /** Correlation coefficient at that shift, -1..1. */
  correlation: number;
};

const leastCorrelation = 0.5;
const leastLead = 18;

/**
 * @param latest shares of one turn or the mean of some, any start. @param stored learnt shares, as many.
 * @param scatter standard error of one of `latest`, in the same unit; 0 where they are exact.
 * Issues: bad-setting, not-finite, no-match (an even wheel has no pattern; this pattern is another wheel's), ambiguous.
 */
export function matchPattern(
  latest: ArrayLike<number>,
  stored: ArrayLike<number>,
  scatter: number,
): Outcome<PatternMatch> {
  const n = latest.length;
  if (n < 2 || stored.length !== n)
    return refused('bad-setting', `${n} shares against a pattern of ${stored.length}`);
  if (!(Number.isFinite(scatter) && scatter >= 0)) return refused('bad-setting', `scatter ${scatter}`);
  const bad = notFinite(latest, 'share') ?? notFinite(stored, 'stored share');
  if (bad) return bad;
  const x = withoutMean(latest);
  const y = withoutMean(stored);
  const energy = Math.sqrt(dot(x, x, 0)) * Math.sqrt(dot(y, y, 0));
  const flat = Math.max(1e-100, 1e-9 * Math.max(...Array.from(stored, Math.abs)));
  if (!(Math.sqrt(dot(y, y, 0) / n) > flat && Math.sqrt(dot(x, x, 0) / n) > flat))
    return refused('no-match', 'the teeth are even: there is no pattern to tell them by');
  let shift = 0;
  let best = -Infinity;
  let next = -Infinity;
  for (let s = 0; s < n; s++) {
    const value = dot(x, y, s);
    if (value > best) {
      next = best;
      best = value;
      shift = s;
    } else next = Math.max(next, value);
  }
  const correlation = best / energy;
  if (correlation < leastCorrelation) return refused('no-match', `best correlation ${correlation}`);
  // Sum of squares left by a shift is a constant less twice its correlation.
  const lead = 2 * (best - next);
  if (lead <= Math.max(leastLead * scatter * scatter, 1e-9 * energy))
    return refused(
      'ambiguous',
      `another shift fits as well, correlation ${next / energy} against ${correlation}`,
    );
  return got({ shift, correlation });
}

function withoutMean(values: ArrayLike<number>): Float64Array {
  const out = Float64Array.from(values);
  const mean = out.reduce((sum, value) => sum + value, 0) / out.length;
  return out.map((value) => value - mean);
}

function dot(x: Float64Array, y: Float64Array, shift: number): number {
  let sum = 0;
  for (let k = 0; k < x.length; k++) sum += x[k]! * y[(k + shift) % y.length]!;
  return sum;
}
