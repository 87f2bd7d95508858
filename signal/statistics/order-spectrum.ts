/**
 * Orders of the shaft: how strongly something that is known tooth by tooth (speed, period, swing) repeats once, twice, ...
 * a turn. X[r] = (1/N) sum of x[k] exp(-2 pi j r k / N), averaged over whole turns, so that what does not belong to the
 * wheel falls away. Order 1 is run-out, order 2 an ellipse or a misaligned shaft, order N/2 teeth that alternate.
 * Source: discrete Fourier transform; the readings are common practice of the trade.
 */
import { got, notCount, notFinite, refused, type Outcome } from '@/signal/statistics/issue';

export type OrderSpectrum = {
  turns: number;
  mean: number;
  /** Amplitude (half of peak to peak) of order r at index r, 0 (the mean) to floor(N / 2), in the unit of the values. */
  amplitude: Float64Array;
  /** Cosine convention, at position 0, rad. */
  phaseRad: Float64Array;
  /** Positions a turn that held no value and were filled between their neighbours. */
  filled: number;
};

/**
 * @param values one a position, turn after turn, position 0 first; a started turn at the end is left out. NaN where the
 * wheel has no tooth: filled by a straight line between its neighbours (up to a quarter of the wheel), which takes from
 * the high orders about their share of the wheel. Speed needs no filling: give the gap's speed to all its positions.
 * Issues: bad-setting (fewer than two positions), too-few (no whole turn; more than a quarter missing), not-finite
 * (an infinity; the same position there in one turn and missing in another).
 */
export function orderSpectrum(values: ArrayLike<number>, positions: number): Outcome<OrderSpectrum> {
  const bad = notCount(positions, 2, 'number of positions');
  if (bad) return bad;
  const turns = Math.floor(values.length / positions);
  if (turns === 0) return refused('too-few', `${values.length} values are no whole turn of ${positions}`);
  const turn = new Float64Array(positions);
  for (let k = 0; k < positions; k++) {
    let sum = 0;
    let missing = 0;
    for (let r = 0; r < turns; r++) {
      const value = values[r * positions + k]!;
      if (Number.isNaN(value)) missing++;
      else sum += value;
    }
    if (missing % turns !== 0)
      return refused('not-finite', `position ${k} is missing in ${missing} of ${turns} turns`);
    turn[k] = missing ? NaN : sum / turns;
  }
  const filled = fillMissing(turn);
  if (filled > positions / 4) return refused('too-few', `${filled} of ${positions} positions are missing`);
  const infinite = notFinite(turn, 'position');
  if (infinite) return infinite;
  const orders = Math.floor(positions / 2);
  const amplitude = new Float64Array(orders + 1);
  const phaseRad = new Float64Array(orders + 1);
  const cosines = Float64Array.from({ length: positions }, (_, k) => Math.cos((2 * Math.PI * k) / positions));
  const sines = Float64Array.from({ length: positions }, (_, k) => Math.sin((2 * Math.PI * k) / positions));
  for (let r = 0; r <= orders; r++) {
    let re = 0;
    let im = 0;
    for (let k = 0, at = 0; k < positions; k++, at = (at + r) % positions) {
      re += turn[k]! * cosines[at]!;
      im -= turn[k]! * sines[at]!;
    }
    const once = r === 0 || 2 * r === positions;
    amplitude[r] = ((once ? 1 : 2) * Math.hypot(re, im)) / positions;
    phaseRad[r] = Math.atan2(im, re);
  }
  return got({
    turns,
    mean: amplitude[0]! * Math.cos(phaseRad[0]!),
    amplitude,
    phaseRad,
    filled,
  });
}

/** Fills NaN runs by straight lines around the ring; returns how many. A ring of NaN only stays as it is. */
function fillMissing(turn: Float64Array): number {
  const n = turn.length;
  const there = turn.findIndex((value) => !Number.isNaN(value));
  if (there < 0) return n;
  let filled = 0;
  for (let step = 1, from = there; step <= n; step++) {
    const at = (there + step) % n;
    if (Number.isNaN(turn[at]!)) continue;
    const gap = (at - from + n) % n || n;
    for (let i = 1; i < gap; i++) {
      turn[(from + i) % n] = turn[from]! + (i / gap) * (turn[at]! - turn[from]!);
      filled++;
    }
    from = at;
  }
  return filled;
}
