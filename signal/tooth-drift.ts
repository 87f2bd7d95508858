/**
 * How fast a whole signal drifts, from the log of its teeth: a straight line by least squares through the troughs, through
 * the peaks, and through the middles between a peak and the trough on either side of it. The one that fits best is taken: on
 * a wheel whose teeth differ, pulses over a constant base have constant troughs, and swings about a constant middle have
 * constant middles. Where troughs and peaks both lie on lines the middle is taken: a swing that grows moves them apart, and
 * is no drift.
 */
import type { ToothLog } from '@/signal/tooth-log';

const troughs = 0;
const peaks = 1;
/** With the trough before the peak, and with the one after it. */
const middles = 2;
const middlesAfter = 3;
const series = 4;
/** Of each: sums of values, of values times times, and of squares. */
const sums = new Float64Array(3 * series);
const values = new Float64Array(series);
/** A line fits: rms of what is left, share of the swing. */
const fitsShare = 0.05;

/**
 * V/s, over the teeth from number `from` on that are whole and followed by another one.
 * @param leastV a tooth that swings less says that no whole teeth pass.
 * @returns 0 where there are fewer than `fewest`, where one is less than `leastV`, or where none of the four lies on a line.
 */
export function fitDrift(log: ToothLog, from: number, fewest: number, leastV: number): number {
  const { mask, riseS, peakV, troughV } = log;
  sums.fill(0);
  let count = 0;
  let times = 0;
  let squares = 0;
  // Against the first of them, so that a large baseline costs no digits.
  let zeroV = NaN;
  let zeroS = NaN;
  for (let n = from; n < log.count - 1; n++) {
    const i = n & mask;
    const trough = troughV[i]!;
    const peak = peakV[i]!;
    const after = troughV[(n + 1) & mask]!;
    if (Number.isNaN(trough + peak + after)) continue;
    if (peak - trough < leastV) return 0;
    if (count++ === 0) {
      zeroV = trough;
      zeroS = riseS[i]!;
    }
    const t = riseS[i]! - zeroS;
    times += t;
    squares += t * t;
    values[troughs] = trough - zeroV;
    values[peaks] = peak - zeroV;
    values[middles] = (trough + peak) / 2 - zeroV;
    values[middlesAfter] = (peak + after) / 2 - zeroV;
    for (let s = 0; s < series; s++) {
      const value = values[s]!;
      sums[s] = sums[s]! + value;
      sums[s + series] = sums[s + series]! + value * t;
      sums[s + 2 * series] = sums[s + 2 * series]! + value * value;
    }
  }
  if (count < fewest) return 0;
  const spread = squares - (times * times) / count;
  const slope = (s: number): number => (sums[s + series]! - (sums[s]! * times) / count) / spread;
  const residue = (s: number): number =>
    Math.max(0, sums[s + 2 * series]! - (sums[s]! * sums[s]!) / count - slope(s) ** 2 * spread);
  const fitsV = (fitsShare * (sums[peaks]! - sums[troughs]!)) / count;
  const most = count * fitsV * fitsV;
  let best: number = middles;
  if (residue(middlesAfter) < residue(best)) best = middlesAfter;
  if (Math.max(residue(troughs), residue(peaks)) >= most) {
    if (residue(troughs) < residue(best)) best = troughs;
    if (residue(peaks) < residue(best)) best = peaks;
  }
  if (!(residue(best) < most)) return 0;
  const driftVPerS = slope(best);
  return Number.isFinite(driftVPerS) ? driftVPerS : 0;
}
