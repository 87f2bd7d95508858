/**
 * The two loops in which most samples are spent, each a function of its own: within one loop with the others they crowd
 * each other out of the registers and take twice as long.
 */
import type { Detector } from '@/signal/detector-state';

/** First index at which `v` is above `mid`, following the trough on the way. */
export function scanLow(d: Detector, v: Float64Array, from: number, end: number): number {
  const mid = d.midV;
  let lowest = d.extremeV;
  let j = from;
  for (; j <= end; j++) {
    const x = v[j]!;
    if (x > mid) break;
    if (x < lowest) lowest = x;
  }
  d.extremeV = lowest;
  return j;
}

/** First index at which `v` is below `mid`, following the peak on the way. */
export function scanHigh(d: Detector, v: Float64Array, from: number, end: number): number {
  const mid = d.midV;
  let highest = d.extremeV;
  let j = from;
  for (; j <= end; j++) {
    const x = v[j]!;
    if (x < mid) break;
    if (x > highest) highest = x;
  }
  d.extremeV = highest;
  return j;
}
