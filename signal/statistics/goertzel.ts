/**
 * Strength of one frequency, by Goertzel's recursion s[k] = x[k] + 2 cos(w) s[k-1] - s[k-2], w = 2 pi f / fs: one
 * multiplication a sample, no table. The record's mean is taken out, whatever the number of cycles. Amplitudes of other
 * tones leak in unless the record holds whole cycles of both: 0.1 s and its multiples suit 50 and 60 Hz alike.
 * Source: G. Goertzel, American Mathematical Monthly 65 (1958) 34-35.
 *
 * The recursion's rounding grows as the samples in one cycle: with a cycle or more in the record it stays below 1e-9 of
 * the largest sample up to a million samples.
 */
import { got, notFinite, notPositive, refused, type Outcome } from '@/signal/statistics/issue';

export type Goertzel = { rateHz: number; hz: number; s1: number; s2: number; sum: number; count: number };

export type Tone = {
  /** Amplitude (half of peak to peak), in the unit of the samples. */
  amplitude: number;
  /** Cosine convention, at the first sample, -pi..pi. */
  phaseRad: number;
};

/** Issues: bad-setting (frequency not between 0 and half the rate). */
export function createGoertzel(rateHz: number, hz: number): Outcome<Goertzel> {
  const bad = notPositive(rateHz, 'sample rate') ?? notPositive(hz, 'frequency');
  if (bad) return bad;
  if (hz >= rateHz / 2)
    return refused('bad-setting', `${hz} Hz is not below half of ${rateHz} samples a second`);
  return got({ rateHz, hz, s1: 0, s2: 0, sum: 0, count: 0 });
}

/** Takes `samples[from..to)`, which must be finite; any split into blocks gives the same result. */
export function runGoertzel(state: Goertzel, samples: ArrayLike<number>, from: number, to: number): void {
  const twice = 2 * Math.cos((2 * Math.PI * state.hz) / state.rateHz);
  let { s1, s2, sum } = state;
  for (let i = from; i < to; i++) {
    const s0 = samples[i]! + twice * s1 - s2;
    s2 = s1;
    s1 = s0;
    sum += samples[i]!;
  }
  state.s1 = s1;
  state.s2 = s2;
  state.sum = sum;
  state.count += to - from;
}

/** Issues: too-few (less than one cycle seen). */
export function readGoertzel({ rateHz, hz, s1, s2, sum, count }: Goertzel): Outcome<Tone> {
  if (count * hz < rateHz || count < 3)
    return refused('too-few', `${(count * hz) / rateHz} cycles of ${hz} Hz seen, one needed`);
  const w = (2 * Math.PI * hz) / rateHz;
  // X = sum of x[k] exp(-j w k) = (s1 - exp(-j w) s2) exp(-j w (count - 1)).
  const re0 = s1 - Math.cos(w) * s2;
  const im0 = Math.sin(w) * s2;
  const last = w * (count - 1);
  const mean = sum / count;
  // The mean's own part: sum of exp(-j w k) = sin(w count / 2) / sin(w / 2) exp(-j w (count - 1) / 2).
  const flat = (mean * Math.sin((w * count) / 2)) / Math.sin(w / 2);
  const re = re0 * Math.cos(last) + im0 * Math.sin(last) - flat * Math.cos(last / 2);
  const im = im0 * Math.cos(last) - re0 * Math.sin(last) + flat * Math.sin(last / 2);
  return got({ amplitude: (2 * Math.hypot(re, im)) / count, phaseRad: Math.atan2(im, re) });
}

/** One record at once. Issues: bad-setting, not-finite, too-few. */
export function toneOf(samples: ArrayLike<number>, rateHz: number, hz: number): Outcome<Tone> {
  const state = createGoertzel(rateHz, hz);
  if (!state.ok) return state;
  const bad = notFinite(samples, 'sample');
  if (bad) return bad;
  runGoertzel(state.value, samples, 0, samples.length);
  return readGoertzel(state.value);
}
