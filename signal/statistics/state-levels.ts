/**
 * State levels of a two-state waveform by the histogram, in the manner of IEEE Std 181: the record's span is cut into
 * equal bins; the lower half of the used bins belongs to the low state, the upper half to the high one, and the middle
 * bin to both. A level is the fullest bin of its half (mode, the first where several are) or the mean of its half.
 *
 * Source: IEEE Std 181-2011 by way of the statelevels pages of two signal toolboxes; the standard's text itself was not
 * at hand. It covers two-state signals only: for a sine take `sine-fit.ts`, for pulses that hold less than a few per cent
 * of the samples take peaks and troughs.
 */
import { got, notCount, notFinite, refused, type Outcome } from '@/signal/statistics/issue';

export type StateLevels = {
  lowV: number;
  highV: number;
  /** Half a bin: a mode can be no finer. */
  resolutionV: number;
  histogram: Uint32Array;
  /** Lower edge of the first bin, V, and width of each. */
  firstBinV: number;
  binV: number;
};

export type StateLevelOptions = {
  method: 'mode' | 'mean';
  bins: number;
  /** Rms of the noise, V, where it is known: levels closer than four of it are no two states. */
  noiseV?: number;
};

const leastSigmas = 4;
/** Levels nearer than this share of the whole span are what noise or one spike makes of a single state. */
const leastShareOfSpan = 0.1;

/**
 * Levels of `volts` (any unit, then the result is in it too).
 * Issues: bad-setting, too-few (none), not-finite, no-two-states (one single value; levels within four sigmas of noise;
 * levels within a tenth of the span).
 */
export function stateLevels(
  volts: ArrayLike<number>,
  options: StateLevelOptions = { method: 'mode', bins: 100 },
): Outcome<StateLevels> {
  const { method, bins, noiseV = NaN } = options;
  const bad = notCount(bins, 2, 'number of bins') ?? notFinite(volts, 'sample');
  if (bad) return bad;
  if (volts.length === 0) return refused('too-few', 'no samples');
  let least = Infinity;
  let most = -Infinity;
  for (let i = 0; i < volts.length; i++) {
    least = Math.min(least, volts[i]!);
    most = Math.max(most, volts[i]!);
  }
  const firstBinV = least - Number.EPSILON;
  const binV = (most + Number.EPSILON - firstBinV) / bins;
  // Far from 0 the doubles themselves are coarse: bins must stay wider than their steps.
  if (!(binV > 2 * Number.EPSILON * Math.max(1, Math.abs(least), Math.abs(most))) || !Number.isFinite(binV))
    return refused('no-two-states', `all ${volts.length} samples are ${least} V, to rounding`);
  const histogram = new Uint32Array(bins);
  for (let i = 0; i < volts.length; i++) {
    const bin = Math.min(bins, Math.max(1, Math.ceil((volts[i]! - firstBinV) / binV)));
    histogram[bin - 1] = histogram[bin - 1]! + 1;
  }
  const first = histogram.findIndex((count) => count > 0);
  const last = histogram.findLastIndex((count) => count > 0);
  const middle = first + Math.floor((last - first) / 2);
  const place = method === 'mode' ? fullest : mean;
  const lowV = firstBinV + binV * place(histogram, first, middle);
  const highV = firstBinV + binV * place(histogram, middle, last);
  const apartV = highV - lowV;
  if (apartV < leastSigmas * noiseV)
    return refused('no-two-states', `levels ${apartV} V apart, noise ${noiseV} V rms`);
  if (apartV < leastShareOfSpan * binV * bins)
    return refused('no-two-states', `levels ${apartV} V apart in a span of ${binV * bins} V`);
  return got({ lowV, highV, resolutionV: binV / 2, histogram, firstBinV, binV });
}

/** Middle of the fullest bin of `from..to`, in bins from the first one's lower edge. */
function fullest(histogram: Uint32Array, from: number, to: number): number {
  let best = from;
  for (let i = from + 1; i <= to; i++) if (histogram[i]! > histogram[best]!) best = i;
  return best + 0.5;
}

function mean(histogram: Uint32Array, from: number, to: number): number {
  let sum = 0;
  let count = 0;
  for (let i = from; i <= to; i++) {
    sum += (i + 0.5) * histogram[i]!;
    count += histogram[i]!;
  }
  return sum / count;
}
