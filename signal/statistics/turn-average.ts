/**
 * Once-per-turn averaging: the voltage (or anything sampled) at fixed angles of the wheel, the same angle averaged over
 * many turns. What does not belong to the wheel dies away: noise as 1 / sqrt(turns); a tone that is no whole multiple of
 * the turn leaves what its phase happens to leave.
 *
 * Angle comes from the teeth, linear between neighbours; the voltage is read by a parabola-free cubic through four samples
 * (Catmull-Rom), whose error falls with the third power of the sample step.
 * Source: the steps of time-synchronous averaging as the order-tracking literature gives them (Fyfe and Munk 1997).
 */
import {
  got,
  notCount,
  notFinite,
  notInstants,
  notPositive,
  refused,
  type Outcome,
} from '@/signal/statistics/issue';
import { instantAt } from '@/signal/statistics/tooth-phase';

export type SampledSignal = {
  values: ArrayLike<number>;
  /** Instant of the first value, s, and values a second. */
  startS: number;
  rateHz: number;
};

/** Held by the caller; `mean` and `squares` are one number an angle, from the turn's mark on (Welford's recursion). */
export type TurnAverage = { turns: number; mean: Float64Array; squares: Float64Array };

/** Issues: bad-setting. */
export function createTurnAverage(angles: number): Outcome<TurnAverage> {
  return (
    notCount(angles, 1, 'number of angles') ??
    got({ turns: 0, mean: new Float64Array(angles), squares: new Float64Array(angles) })
  );
}

/**
 * Values of one turn at `angles` even steps from its mark.
 * @param teethS instants of the turn's teeth, s, its first and the next turn's first included.
 * @param shares part of the turn that each interval is (sum 1); null: even.
 * Issues: bad-setting, too-few, not-finite, not-ascending, outside (the turn is not wholly within the values).
 */
export function resampleTurn(
  { values, startS, rateHz }: SampledSignal,
  teethS: ArrayLike<number>,
  angles: number,
  shares: ArrayLike<number> | null = null,
): Outcome<Float64Array> {
  const bad =
    notInstants(teethS, 2, 'tooth') ??
    notPositive(rateHz, 'sample rate') ??
    notFinite([startS], 'start') ??
    notCount(angles, 1, 'number of angles');
  if (bad) return bad;
  const intervals = teethS.length - 1;
  if (shares && shares.length !== intervals)
    return refused('bad-setting', `${shares.length} shares for ${intervals} intervals`);
  const out = new Float64Array(angles);
  let tooth = 0;
  let passed = 0;
  for (let k = 0; k < angles; k++) {
    const turn = k / angles;
    let place = turn * intervals;
    if (shares) {
      while (tooth < intervals - 1 && turn >= passed + shares[tooth]!) passed += shares[tooth++]!;
      place = tooth + Math.min(1, (turn - passed) / shares[tooth]!);
    }
    const value = valueAt(values, (instantAt(teethS, place) - startS) * rateHz);
    if (!Number.isFinite(value))
      return refused('outside', `angle ${k} of ${angles} has no finite sample on either side`);
    out[k] = value;
  }
  return got(out);
}

/** Adds one turn's values, as `resampleTurn` gives them. Issues: bad-setting (another number of angles), not-finite. */
export function addTurn(average: TurnAverage, values: ArrayLike<number>): Outcome<number> {
  const { mean, squares } = average;
  if (values.length !== mean.length)
    return refused('bad-setting', `${values.length} values for ${mean.length} angles`);
  const bad = notFinite(values, 'value');
  if (bad) return bad;
  average.turns++;
  for (let k = 0; k < mean.length; k++) {
    const off = values[k]! - mean[k]!;
    mean[k] = mean[k]! + off / average.turns;
    squares[k] = squares[k]! + off * (values[k]! - mean[k]!);
  }
  return got(average.turns);
}

/**
 * The mean turn, and how much single turns differ from it (rms an angle, divided by turns - 1); the mean's own standard
 * error is that over sqrt(turns). Issues: too-few (two turns).
 */
export function readTurnAverage({ turns, mean, squares }: TurnAverage): Outcome<{
  turns: number;
  mean: Float64Array;
  scatter: Float64Array;
}> {
  if (turns < 2) return refused('too-few', `${turns} turns averaged, 2 needed`);
  return got({ turns, mean: mean.slice(), scatter: squares.map((sum) => Math.sqrt(sum / (turns - 1))) });
}

/** Value at a fractional index; NaN outside. The end intervals, which lack a fourth sample, are linear. */
function valueAt(values: ArrayLike<number>, index: number): number {
  if (!(index >= 0 && index <= values.length - 1)) return NaN;
  const i = Math.min(values.length - 2, Math.floor(index));
  if (i < 0) return values[0]!;
  const u = index - i;
  const b = values[i]!;
  const c = values[i + 1]!;
  if (i === 0 || i + 2 >= values.length) return b + u * (c - b);
  const a = values[i - 1]!;
  const d = values[i + 2]!;
  return b + 0.5 * u * (c - a + u * (2 * a - 5 * b + 4 * c - d + u * (3 * (b - c) + d - a)));
}
