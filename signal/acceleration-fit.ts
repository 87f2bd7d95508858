/**
 * Acceleration from whole turns, which the wheel's own unevenness cannot bend: the mean speeds of turns that slide on by a
 * tooth each, v = 1 / (t[k] - t[k-N]), over their middles. Where the acceleration is even a mean speed is the speed at the
 * middle, so that the slope of the straight line through them is it (the same as a quadratic of angle over time through two
 * turns, less the places of the teeth).
 *
 * Its standard error: that of a line's slope from the scatter about it, but no less than that of turns between edges of the
 * error s, sqrt(2) s / N of a speed each.
 */
import type { SpeedRing } from '@/signal/speed-ring';
import { smallSample } from '@/signal/speed-scatter';

/** The line must reach over so much of a turn, through so many speeds. */
const leastReach = 0.5;
const fewestSpeeds = 3;
const mostSpeeds = 256;
/** As in `speed-error.ts`. */
const margin = 1.1;
/** What edges are told to be off by counts as so many speeds. */
const toldWeight = 4;

export type Acceleration = {
  /** Of the wheel, turns per second squared, positive where it turns faster and faster; NaN: not known. */
  perS2: number;
  errorPerS2: number;
};

/** Positions behind the newest tooth that the fit looks at: two turns, more of a wheel that has few. */
export function positionsForFit(positions: number): number {
  return Math.max(2 * positions, positions + 4);
}

const unknown: Acceleration = { perS2: NaN, errorPerS2: NaN };

/**
 * Acceleration over the last turns of `ring`, whose teeth are an unbroken row: up to two turns (more where the wheel has few teeth), one and a half at least.
 * @param positions of the wheel. @param edgeError standard error of an edge, positions.
 */
export function fitTurns(ring: SpeedRing, positions: number, edgeError: number): Acceleration {
  const { times, places, mask, first, next } = ring;
  const last = next - 1;
  const oldest = places[last & mask]! - positionsForFit(positions);
  const stride = Math.max(1, Math.ceil(positions / mostSpeeds));
  if (ring.count < 2) return unknown;
  const lastS = times[last & mask]!;
  let count = 0;
  let meanT = 0;
  let meanV = 0;
  let tt = 0;
  let tv = 0;
  let vv = 0;
  let begin = last;
  let reach = 0;
  for (let k = last; k >= first; k -= stride) {
    const turnAgo = places[k & mask]! - positions;
    // The edge a turn ago is in the first of these speeds already.
    if (turnAgo <= oldest) break;
    begin = Math.min(begin, k);
    while (begin > first && places[begin & mask]! > turnAgo) begin--;
    if (places[begin & mask]! > turnAgo) break;
    if (places[begin & mask]! !== turnAgo) continue;
    const turnS = times[k & mask]! - times[begin & mask]!;
    // Running means (Welford): the numbers are small beside the instants that they are made of.
    const t = times[k & mask]! - lastS - turnS / 2;
    const v = 1 / turnS;
    count++;
    const dt = t - meanT;
    const dv = v - meanV;
    meanT += dt / count;
    meanV += dv / count;
    tt += dt * (t - meanT);
    tv += dt * (v - meanV);
    vv += dv * (v - meanV);
    reach = places[last & mask]! - places[k & mask]!;
  }
  if (count < fewestSpeeds || reach < leastReach * positions) return unknown;
  const perS2 = tv / tt;
  let freedom = count - 2;
  let variance = (vv - (tv * tv) / tt) / freedom;
  const told = 2 * ((edgeError * meanV) / positions) ** 2;
  if (told > 0) {
    // A few speeds tell little of their scatter.
    variance = Math.max(told, (freedom * variance + toldWeight * told) / (freedom + toldWeight));
    freedom += toldWeight;
  }
  return { perS2, errorPerS2: margin * smallSample(freedom) * Math.sqrt(variance / tt) };
}
