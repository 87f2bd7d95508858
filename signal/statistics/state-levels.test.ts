import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { stateLevels } from '@/signal/statistics/state-levels';
import { issueOf, valueOf } from '@/signal/statistics/test-values';
import { normal, seeded } from '@/signal/test-signals';

describe('state levels', () => {
  it('finds any two levels to half a bin, by either method, through noise of a fiftieth of the swing', () => {
    fc.assert(
      fc.property(
        fc.double({ min: -10, max: 10, noNaN: true }),
        fc.double({ min: 0.01, max: 10, noNaN: true }),
        fc.double({ min: 0.2, max: 0.8, noNaN: true }),
        fc.integer(),
        (low, swing, duty, seed) => {
          const random = normal(seeded(seed));
          const noiseV = swing / 50;
          const volts = Float64Array.from(
            { length: 4000 },
            (_, k) => low + ((k % 100) / 100 < duty ? swing : 0) + noiseV * random(),
          );
          for (const method of ['mode', 'mean'] as const) {
            const found = valueOf(stateLevels(volts, { method, bins: 100, noiseV }));
            // The fullest bin of a bell of 4000 samples may be one sigma from its top.
            const most = found.resolutionV + 1.5 * noiseV;
            expect(Math.abs(found.lowV - low)).toBeLessThan(most);
            expect(Math.abs(found.highV - low - swing)).toBeLessThan(most);
          }
        },
      ),
      { numRuns: 50 },
    );
  });

  it('puts every sample into a bin, least and most included, however far from 0', () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: 60_000, max: 65_535, noNaN: true }), { minLength: 2 }),
        (values) => {
          const found = stateLevels([...values, 60_000, 65_535], { method: 'mean', bins: 20 });
          const counted = valueOf(found).histogram.reduce((sum, count) => sum + count, 0);
          expect(counted).toBe(values.length + 2);
        },
      ),
    );
  });

  it('says that there are no two states: a constant, noise alone, levels within four sigmas, a lone spike', () => {
    const random = normal(seeded(5));
    const noise = Float64Array.from({ length: 5000 }, () => 2.5 + 0.01 * random());
    const spike = new Float64Array(1000).fill(1).map((v, k) => (k === 500 ? 9 : v + 0.001 * (k % 3)));
    expect(issueOf(stateLevels(new Float64Array(50).fill(2.5)))).toBe('no-two-states');
    expect(issueOf(stateLevels([2.5]))).toBe('no-two-states');
    expect(issueOf(stateLevels(noise, { method: 'mode', bins: 100, noiseV: 0.01 }))).toBe('no-two-states');
    expect(issueOf(stateLevels(noise, { method: 'mean', bins: 100, noiseV: 0.01 }))).toBe('no-two-states');
    expect(issueOf(stateLevels(noise))).toBe('no-two-states');
    expect(issueOf(stateLevels([0, 0.03, 0, 0.03], { method: 'mode', bins: 100, noiseV: 0.01 }))).toBe(
      'no-two-states',
    );
    // One sample high is a pulse as far as a histogram can tell: levels it has, and both are real samples.
    expect(valueOf(stateLevels(spike)).highV).toBeCloseTo(9, 0);
  });

  it('says what is wrong with its input', () => {
    expect(issueOf(stateLevels([]))).toBe('too-few');
    expect(issueOf(stateLevels([1, NaN, 2]))).toBe('not-finite');
    expect(issueOf(stateLevels([1, 2], { method: 'mode', bins: 1 }))).toBe('bad-setting');
    expect(issueOf(stateLevels([1, 2], { method: 'mode', bins: 2.5 }))).toBe('bad-setting');
  });
});
