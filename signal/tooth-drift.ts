/**
 * How fast a whole signal drifts, from the log of its teeth: a straight line by least squares through the troughs,
 * through the peaks, and through the middles between them. The one that fits best is taken: on a wheel whose teeth differ,
 * pulses over a constant base have constant troughs, and swings about a constant middle have constant middles. Where troughs
 * and peaks both lie on lines the middle is taken: a swing that grows moves them apart, and is no drift.
 */
import type { ToothLog } from '@/signal/tooth-log';

/** Of troughs, peaks and middles: sums of values, of values times times, and of squares. */
const sums = new Float64Array(9);
const series = 3;
const middles = 2;
/** A line fits: rms of what is left, share of the swing. */
const fitsShare = 0.05;

/**
 * V/s, over the whole teeth from number `from` on.
 * @returns 0 where there are fewer than `fewest`.
 */
export function fitDrift(log: ToothLog, from: number, fewest: number): number {
  const { mask, riseS, peakV, troughV } = log;
  sums.fill(0);
  let count = 0;
  let times = 0;
  let squares = 0;
  // Against the first of them, so that a large baseline costs no digits.
  let zeroV = NaN;
  let zeroS = NaN;
  for (let n = from; n < log.count; n++) {
    const i = n & mask;
    const trough = troughV[i]!;
    const peak = peakV[i]!;
    if (Number.isNaN(trough + peak)) continue;
    if (count++ === 0) {
      zeroV = trough;
      zeroS = riseS[i]!;
    }
    const t = riseS[i]! - zeroS;
    times += t;
    squares += t * t;
    for (let s = 0; s < series; s++) {
      const value = (s === 0 ? trough : s === 1 ? peak : (trough + peak) / 2) - zeroV;
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
  const ofTroughs = residue(0);
  const ofPeaks = residue(1);
  const fitsV = (fitsShare * (sums[1]! - sums[0]!)) / count;
  let best = ofTroughs < ofPeaks ? 0 : 1;
  if (Math.max(ofTroughs, ofPeaks) < count * fitsV * fitsV || residue(middles) < residue(best))
    best = middles;
  const driftVPerS = slope(best);
  return Number.isFinite(driftVPerS) ? driftVPerS : 0;
}
