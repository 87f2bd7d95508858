import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { createGoertzel, readGoertzel, runGoertzel, toneOf } from '@/signal/statistics/goertzel';
import { issueOf, valueOf } from '@/signal/statistics/test-values';
import { sampled } from '@/signal/test-signals';

describe('strength of one frequency', () => {
  it('is that of the plain Fourier sum with the mean taken out, at any frequency', () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: -5, max: 5, noNaN: true }), { minLength: 50, maxLength: 200 }),
        fc.double({ min: 0.03, max: 0.49, noNaN: true }),
        (volts, share) => {
          const mean = volts.reduce((sum, v) => sum + v, 0) / volts.length;
          let re = 0;
          let im = 0;
          volts.forEach((v, k) => {
            re += (v - mean) * Math.cos(2 * Math.PI * share * k);
            im -= (v - mean) * Math.sin(2 * Math.PI * share * k);
          });
          const { amplitude, phaseRad } = valueOf(toneOf(volts, 1000, 1000 * share));
          expect(Math.abs(amplitude - (2 * Math.hypot(re, im)) / volts.length)).toBeLessThan(1e-10);
          expect(Math.abs(amplitude * Math.cos(phaseRad) - (2 * re) / volts.length)).toBeLessThan(1e-10);
          expect(Math.abs(amplitude * Math.sin(phaseRad) - (2 * im) / volts.length)).toBeLessThan(1e-10);
        },
      ),
    );
  });

  it('is the same however the samples are split into blocks', () => {
    const volts = sampled(3000, 10_000, (t) => 1.65 + 0.2 * Math.cos(2 * Math.PI * 50 * t + 0.7));
    const whole = valueOf(toneOf(volts, 10_000, 50));
    fc.assert(
      fc.property(fc.array(fc.integer({ min: 0, max: 3000 }), { maxLength: 20 }), (cuts) => {
        const state = valueOf(createGoertzel(10_000, 50));
        const ends = [0, ...cuts.sort((a, b) => a - b), 3000];
        ends.slice(1).forEach((to, k) => runGoertzel(state, volts, ends[k]!, to));
        expect(valueOf(readGoertzel(state))).toEqual(whole);
      }),
    );
    expect(whole.amplitude).toBeCloseTo(0.2, 9);
    expect(whole.phaseRad).toBeCloseTo(0.7, 9);
  });

  it('keeps its digits over a million samples of one slow cycle on a large baseline', () => {
    const volts = sampled(1_000_000, 1e6, (t) => 100 + 0.01 * Math.cos(2 * Math.PI * t + 0.3));
    const { amplitude, phaseRad } = valueOf(toneOf(volts, 1e6, 1));
    expect(Math.abs(amplitude - 0.01)).toBeLessThan(1e-8);
    expect(Math.abs(phaseRad - 0.3)).toBeLessThan(1e-5);
  });

  it('finds nothing in a constant, and refuses less than a cycle', () => {
    expect(valueOf(toneOf(new Float64Array(500).fill(2.5), 1000, 50)).amplitude).toBeLessThan(1e-12);
    expect(issueOf(toneOf(new Float64Array(19), 1000, 50))).toBe('too-few');
    expect(issueOf(toneOf([], 1000, 50))).toBe('too-few');
    expect(issueOf(toneOf([1, NaN], 1000, 50))).toBe('not-finite');
    expect(issueOf(toneOf([1, 2], 1000, 500))).toBe('bad-setting');
  });
});
