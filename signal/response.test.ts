import { describe, expect, it } from 'vitest';
import { designFilter } from '@/signal/filter-design';
import type { Section } from '@/signal/filter-design';
import type { Filter } from '@/signal/model';
import { noiseBehind, powerAt, responseAt } from '@/signal/response';

const rateHz = 20_000;
const filters: Filter[] = [
  { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 1000 },
  { kind: 'lowpass', family: 'bessel', order: 6, cutoffHz: 200 },
  { kind: 'lowpass', family: 'butterworth', order: 2, cutoffHz: 20 },
  { kind: 'highpass', family: 'butterworth', order: 2, cutoffHz: 50 },
  { kind: 'bandpass', family: 'butterworth', order: 4, lowHz: 300, highHz: 3000 },
  { kind: 'notch', family: 'butterworth', order: 2, lowHz: 45, highHz: 55 },
];

/** The chain's answer to one unit sample, by its difference equations. */
function impulseResponse(sections: readonly Section[], count: number): Float64Array {
  const values = new Float64Array(count);
  values[0] = 1;
  for (const { b0, b1, b2, a1, a2 } of sections) {
    const given = values.slice();
    for (let n = 0; n < count; n++) {
      values[n] =
        b0 * given[n]! +
        b1 * (given[n - 1] ?? 0) +
        b2 * (given[n - 2] ?? 0) -
        a1 * (values[n - 1] ?? 0) -
        a2 * (values[n - 2] ?? 0);
    }
  }
  return values;
}

describe('what a chain does to white noise', () => {
  // Parseval: the mean of |H|^2 is the sum of h[n]^2, and that of |H|^2 cos w the sum of h[n] h[n + 1].
  it.each(filters)('agrees with the impulse response: %o', (filter) => {
    const sections = designFilter(filter, rateHz);
    const h = impulseResponse(sections, 40_000);
    const energy = h.reduce((sum, value) => sum + value * value, 0);
    const product = h.reduce((sum, value, n) => sum + value * (h[n + 1] ?? 0), 0);
    const { gain, correlation } = noiseBehind(sections);
    expect(Math.abs(gain / Math.sqrt(energy) - 1)).toBeLessThan(2e-3);
    expect(Math.abs(correlation - product / energy)).toBeLessThan(1e-4);
  });

  it('nothing between passes all of it, each sample by itself', () => {
    expect(noiseBehind([])).toEqual({ gain: 1, correlation: 0 });
  });

  it.each(filters)('its power is the square of its magnitude: %o', (filter) => {
    const sections = designFilter(filter, rateHz);
    for (const hz of [0.01, 1, 30, 50, 400, 5000, 9990]) {
      const squared = responseAt(sections, hz, rateHz).magnitude ** 2;
      expect(Math.abs(powerAt(sections, (2 * Math.PI * hz) / rateHz) - squared)).toBeLessThan(
        1e-9 * squared + 1e-12,
      );
    }
  });
});
