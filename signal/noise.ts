/**
 * Noise of the raw signal, from short bursts of neighbouring samples, so that it costs next to nothing.
 *
 * A burst's sixth differences (1 -6 15 -20 15 -6 1, whose white-noise gain is sqrt(924)) hold almost nothing of a sine with
 * ten samples a period or more (less than 0.2 % of its amplitude). Their median size over 0.6745 is robust against the few
 * that touch a flank; the estimate is the median of the last bursts, within 8 % rms. It is the white part of the noise
 * only: hum and drift are not in it. Where a switch steps at every few samples, first differences find room between the
 * steps.
 *
 * What must not be taken for a tooth is held against more than that: a low estimate is made up for by the bursts before
 * these, and by what so few of them leave open (of eight bursts in a thousand estimates one is 0.6 of the truth).
 *
 * Nothing below the quantum can be seen: the estimate never falls below quantum / sqrt(12). For codes the quantum is
 * one code, for floats the smallest step seen between neighbours.
 */
import { medianOf, replaceSorted } from '@/signal/few-sorted';

export const burstLength = 24;
const differences = burstLength - 6;
const kept = 41;
/** An 8-bit converter of 5 V. */
const coarsestQuantumV = 0.02;
/** Median of |N(0,1)|, and the small-sample bias of the median of 18 overlapping differences (by simulation). */
const medianOfUnit = 0.6745 * 1.013;
const whiteGain = Math.sqrt(924);
const closeDifferences = burstLength - 2;
const closeGain = Math.SQRT2;
/** Steps that fill the differences leave so much less between neighbours; noise alone does not, unless it is but a code or two. */
const farLess = 0.5;
const fewQuanta = 3;
/** The estimates before are remembered for so many bursts, and count for so much of the present one at most. */
const longMemory = 400;
const mostOfMemory = 1.4;
/** Of `n` bursts the noise may be 1 + so many / n of the estimate. */
const doubtBursts = 4;
/** Of a burst at a rail: samples on it, stretches off it, and how long these are on average at most, samples. */
const fewestAtRail = 6;
const fewestRuns = 2;
const longestRun = 2.5;
/** Off a rail for more samples in a row, or beyond an end of the burst: that may be a tooth. */
const mostInRun = 6;
const mostQuanta = 3;

export type NoiseMeter = {
  burst: Float64Array;
  filled: number;
  sizes: Float64Array;
  recent: Float64Array;
  sorted: Float64Array;
  seen: number;
  /** Mean of the estimates of the last minute or so, V. */
  longV: number;
  /** Step between neighbouring values, V; 0 where none has been seen. */
  quantumV: number;
  /** Known beforehand (codes): not to be narrowed by what is seen. */
  quantumFixed: boolean;
};

export function createNoiseMeter(): NoiseMeter {
  return {
    burst: new Float64Array(burstLength),
    filled: 0,
    sizes: new Float64Array(closeDifferences),
    recent: new Float64Array(kept),
    sorted: new Float64Array(kept),
    seen: 0,
    // Numbers begin as fractions: a field that was ever a whole number changes its layout later.
    longV: NaN,
    quantumV: 0,
    quantumFixed: false,
  };
}

/** A burst that a gap cut short is thrown away. */
export function breakBurst(meter: NoiseMeter): void {
  meter.filled = 0;
}

/** `burst` holds a whole burst: it is judged, and the next may begin. */
export function endBurst(meter: NoiseMeter): void {
  meter.filled = 0;
  const { burst, sizes } = meter;
  let least = burst[0]!;
  let largest = least;
  let atLeast = 1;
  let atLargest = 1;
  for (let i = 1; i < burstLength; i++) {
    const x = burst[i]!;
    if (x < least) {
      least = x;
      atLeast = 1;
    } else if (x > largest) {
      largest = x;
      atLargest = 1;
    } else {
      if (x === least) atLeast++;
      if (x === largest) atLargest++;
    }
  }
  let [a, b, c, d, e, f] = [burst[0]!, burst[1]!, burst[2]!, burst[3]!, burst[4]!, burst[5]!];
  for (let i = 0; i < differences; i++) {
    const g = burst[i + 6]!;
    sizes[i] = Math.abs(a + g - 6 * (b + f) + 15 * (c + e) - 20 * d);
    a = b;
    b = c;
    c = d;
    d = e;
    e = f;
    f = g;
  }
  if (!meter.quantumFixed) learnQuantum(meter);
  let sigma = medianOf(sizes, differences) / (medianOfUnit * whiteGain);
  if (sigma > fewQuanta * meter.quantumV) sigma = betweenSteps(burst, sizes, sigma);
  if (atLeast >= fewestAtRail) sigma = Math.max(sigma, clippedNoiseV(burst, least, meter.quantumV));
  if (atLargest >= fewestAtRail) sigma = Math.max(sigma, clippedNoiseV(burst, largest, meter.quantumV));
  const at = meter.seen % kept;
  replaceSorted(meter.sorted, Math.min(meter.seen, kept), meter.recent[at]!, sigma);
  meter.recent[at] = sigma;
  meter.seen++;
  const nowV = middleOf(meter);
  if (meter.seen <= kept) meter.longV = nowV;
  else meter.longV += (nowV - meter.longV) / longMemory;
}

/**
 * Steps of a switch may be too near each other for the differences to pass between them.
 * @returns the noise by first differences where it is far less than `sigma`, else `sigma`.
 */
function betweenSteps(burst: Float64Array, sizes: Float64Array, sigma: number): number {
  const gain = medianOfUnit * closeGain;
  // Their median need not be found where fewer than half are that small.
  const small = 1.001 * farLess * sigma * gain;
  let smaller = 0;
  for (let i = 0; i < closeDifferences; i++) {
    const size = Math.abs(burst[i + 1]! - burst[i]!);
    sizes[i] = size;
    if (size < small) smaller++;
  }
  if (smaller < closeDifferences / 2) return sigma;
  const close = medianOf(sizes, closeDifferences) / gain;
  return close < farLess * sigma ? close : sigma;
}

/**
 * Noise that a rail cuts off on one side, so that many samples are all the same: the rms of what comes out on the other
 * side. It goes to and fro from sample to sample, which a tooth that clips does not. @param railV where enough samples are.
 * @returns 0 where there is none.
 */
function clippedNoiseV(burst: Float64Array, railV: number, quantumV: number): number {
  let outside = 0;
  let runs = 0;
  let squares = 0;
  let i = 0;
  while (i < burstLength && burst[i]! !== railV) i++;
  while (i < burstLength) {
    while (i < burstLength && burst[i]! === railV) i++;
    const from = i;
    let own = 0;
    for (; i < burstLength && burst[i]! !== railV; i++) own += (burst[i]! - railV) ** 2;
    if (i === from || i === burstLength || i - from > mostInRun) continue;
    runs++;
    outside += i - from;
    squares += own;
  }
  if (runs < fewestRuns || outside > longestRun * runs) return 0;
  const rmsV = Math.sqrt(squares / outside);
  // A code that toggles is at both of its ends most of the time.
  return rmsV > mostQuanta * quantumV ? rmsV : 0;
}

function learnQuantum(meter: NoiseMeter): void {
  const { burst } = meter;
  for (let i = 1; i < burstLength; i++) {
    const step = Math.abs(burst[i]! - burst[i - 1]!);
    // Steps this small are rounding of one and the same value, steps this large the two levels of a switch.
    if (step <= 1e-9 * Math.abs(burst[i]!) || step > coarsestQuantumV) continue;
    if (meter.quantumV === 0 || step < meter.quantumV) meter.quantumV = step;
  }
}

/** Rms of the raw noise, V, or NaN before the first burst. */
export function rawNoiseV(meter: NoiseMeter): number {
  return meter.seen === 0 ? NaN : Math.max(middleOf(meter), meter.quantumV / Math.sqrt(12));
}

/** The most that the rms of the raw noise may be, V, as far as the bursts tell; NaN before the first one. */
export function mostNoiseV(meter: NoiseMeter): number {
  const nowV = rawNoiseV(meter);
  const count = Math.min(meter.seen, kept);
  return Math.max(nowV, Math.min(meter.longV, mostOfMemory * nowV)) * (1 + doubtBursts / count);
}

/** The step between neighbouring values, V; before one was seen, the largest that it may be: a code that rarely toggles. */
export function mostQuantumV({ quantumV, quantumFixed }: NoiseMeter): number {
  return quantumFixed || quantumV > 0 ? quantumV : coarsestQuantumV;
}

function middleOf({ sorted, seen }: NoiseMeter): number {
  const count = Math.min(seen, kept);
  return (sorted[(count - 1) >> 1]! + sorted[count >> 1]!) / 2;
}
