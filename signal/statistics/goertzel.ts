/**
 * Strength of one frequency, by Goertzel's recursion s[k] = x[k] + 2 cos(w) s[k-1] - s[k-2], w = 2 pi f / fs, in
 * the form that Reinsch gave it for low frequencies, d[k] = d[k-1] + x[k] - 4 sin^2(w / 2) s[k-1], s[k] = s[k-1] + d[k]:
 * one multiplication a sample, no table, and no digits lost where a cycle is many samples long. The record's mean is taken out,
 * whatever the number of cycles. A reference for tests: the product's rules fit tones beside teeth (`findings/hum-tone.ts`),
 * this measures one in a record. Amplitudes of other tones leak in unless the record holds whole cycles of both: 0.1 s and its multiples suit 50 and 60 Hz alike.
 * Sources: G. Goertzel, American Mathematical Monthly 65 (1958) 34-35; Reinsch's form by way of J. Stoer and R. Bulirsch,
 * Introduction to Numerical Analysis (from memory).
 */
import { got, notFinite, notPositive, refused, type Outcome } from '@/signal/statistics/issue';

export type Goertzel = {
  rateHz: number;
  hz: number;
  /** s[k] and d[k] of the last sample. */
  s: number;
  d: number;
  /** All samples are taken against the first, so that a large baseline costs no digits. */
  first: number;
  sum: number;
  count: number;
};

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
  return got({ rateHz, hz, s: 0, d: 0, first: 0, sum: 0, count: 0 });
}

/** Takes `samples[from..to)`, which must be finite; any split into blocks gives the same result. */
export function runGoertzel(state: Goertzel, samples: ArrayLike<number>, from: number, to: number): void {
  if (from >= to) return;
  if (state.count === 0) state.first = samples[from]!;
  const pull = -4 * Math.sin((Math.PI * state.hz) / state.rateHz) ** 2;
  const { first } = state;
  let { s, d, sum } = state;
  for (let i = from; i < to; i++) {
    const x = samples[i]! - first;
    d += x + pull * s;
    s += d;
    sum += x;
  }
  state.s = s;
  state.d = d;
  state.sum = sum;
  state.count += to - from;
}

/** Issues: too-few (less than one cycle seen). */
export function readGoertzel({ rateHz, hz, s, d, sum, count }: Goertzel): Outcome<Tone> {
  if (count * hz < rateHz || count < 3)
    return refused('too-few', `${(count * hz) / rateHz} cycles of ${hz} Hz seen, one needed`);
  const w = (2 * Math.PI * hz) / rateHz;
  // X = sum of x[k] exp(-j w k) = (s - exp(-j w) (s - d)) exp(-j w (count - 1)).
  const re0 = 2 * Math.sin(w / 2) ** 2 * s + Math.cos(w) * d;
  const im0 = Math.sin(w) * (s - d);
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
