/** What is left of a wheel's steps without mean and low orders, read as teeth: which one stands off, and in what pattern. */
import { middleMagnitude } from '@/signal/wheel-orders';
import type { WheelOrders } from '@/signal/wheel-orders';

/** One order that holds so large a share of what is left may be the shaft's sway too, on a wheel of teeth enough to tell. */
const oneOrder = 0.8;
const fewestForOneOrder = 16;
const ordersUpTo = 512;
const alternating = 0.8;

/** Rms of what is left, by its middle, so that single teeth do not count. */
export function roughness(left: Float64Array, scratch: Float64Array): number {
  return 1.4826 * middleMagnitude(left, scratch);
}

/** Which tooth stands off most: its distances to both neighbours are off the opposite way. */
export function displaced(
  left: Float64Array,
  limit: number,
): { worst: number; worstOff: number; teeth: number } {
  const n = left.length;
  const offOf = (k: number): number => {
    const before = left[k]!;
    const after = left[(k + 1) % n]!;
    if (Number.isNaN(after)) return before;
    return Number.isNaN(before) ? -after : (before - after) / 2;
  };
  let worst = 0;
  let worstOff = 0;
  for (let k = 0; k < n; k++) {
    const off = offOf(k);
    if (!(Math.abs(off) > Math.abs(worstOff))) continue;
    worst = k;
    worstOff = off;
  }
  let teeth = 0;
  // A neighbour of a tooth that is off seems off by half as much.
  for (let k = 0; k < n; k++) if (Math.abs(offOf(k)) > Math.max(0.6 * Math.abs(worstOff), limit / 2)) teeth++;
  return { worst, worstOff, teeth };
}

export function patternOf(left: Float64Array, orders: number): { name: string; order: number } {
  const n = left.length;
  const full = left.map((value) => (Number.isNaN(value) ? 0 : value));
  const energy = full.reduce((sum, value) => sum + value * value, 0);
  const neighbours = full.reduce((sum, value, k) => sum + value * full[(k + 1) % n]!, 0);
  // Cosine of the turn from tooth to tooth: -1 where every second one is off, -0.5 where one is.
  if (neighbours < -alternating * energy) return { name: 'every second tooth', order: 0 };
  if (n <= ordersUpTo && n >= fewestForOneOrder) {
    for (let r = orders + 1; 2 * r < n; r++) {
      if ((2 * powerAt(full, r)) / n > oneOrder * energy) return { name: 'one order', order: r };
    }
  }
  return { name: 'single teeth', order: 0 };
}

/** On a wheel of few teeth: the first order holds most of it, as a sway of the shaft would. */
export function slowWave({ left, positions, variance }: WheelOrders): boolean {
  const full = left.map((value) => (Number.isNaN(value) ? 0 : value));
  return positions > 2 && (2 * powerAt(full, 1)) / positions > oneOrder * positions * variance;
}

/** Squared magnitude of order `r` (Goertzel's recursion). */
function powerAt(values: Float64Array, r: number): number {
  const twice = 2 * Math.cos((2 * Math.PI * r) / values.length);
  let one = 0;
  let two = 0;
  for (let k = 0; k < values.length; k++) {
    const next = values[k]! + twice * one - two;
    two = one;
    one = next;
  }
  return one * one + two * two - twice * one * two;
}
