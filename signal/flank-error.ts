/**
 * How well noise lets a mid crossing be known. On a flank of slope s (V a sample) noise of sigma moves a single crossing by
 * sigma / s. The straight line between two samples averages their noise: by sqrt((2 + rho) / 3), rho the correlation
 * between neighbours (0 white, near 1 behind a low pass). On a slow flank the signal crosses mid several times, and the
 * last crossing before the switch is taken: late by `lagOf` and off by `spreadOf` (rms, the lag in it), both in sigma / s.
 * What counts is q, the rms step of the noise from sample to sample over the flank's own, sqrt(2 (1 - rho)) sigma / s.
 *
 * Both are fitted to simulated ramps (q from 0.02 to 70; white noise, and noise behind Butterworth low passes of 0.01 to
 * 0.2 of the rate): the spread within 11 %, the lag within 0.15.
 */
/** @param q see above; NaN: not known. */
export function lagOf(q: number): number {
  return q > 1 ? 0.04 + 0.43 * Math.log(q) : 0;
}

/** @param oneCrossing what a single crossing has, sqrt((2 + rho) / 3). */
export function spreadOf(q: number, oneCrossing: number): number {
  return q > 2 ? Math.max(oneCrossing, 0.424 + 0.343 * Math.log(q)) : oneCrossing;
}
