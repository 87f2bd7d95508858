import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  cycleToCycleJitter,
  jitterShares,
  periodJitter,
  timeIntervalError,
  withoutTrend,
} from '@/signal/statistics/jitter';
import { issueOf, passes, valueOf } from '@/signal/statistics/test-values';
import { normal, seeded } from '@/signal/test-signals';

const steps = fc.array(fc.double({ min: 1e-4, max: 1e-2, noNaN: true }), { minLength: 4, maxLength: 60 });
const summed = (periods: number[], start = 0) =>
  periods.reduce<number[]>((edges, period) => [...edges, edges[edges.length - 1]! + period], [start]);

describe('jitter', () => {
  it('is none for even edges, and does not depend on where time begins', () => {
    const even = Float64Array.from({ length: 50 }, (_, k) => 3 + k / 512);
    expect(valueOf(periodJitter(even))).toEqual({
      periods: 49,
      meanS: 1 / 512,
      rmsS: 0,
      sampleRmsS: 0,
      peakToPeakS: 0,
    });
    expect(valueOf(cycleToCycleJitter(even))).toEqual({ pairs: 48, mostS: 0, rmsS: 0 });
    fc.assert(
      fc.property(steps, (periods) => {
        const here = valueOf(periodJitter(summed(periods)));
        const later = valueOf(periodJitter(summed(periods, 1000)));
        expect(Math.abs(here.rmsS - later.rmsS)).toBeLessThan(1e-11);
      }),
    );
  });

  it('the largest cycle-to-cycle change of deviations -20 and +15 is 35', () => {
    const edges = summed([100, 80, 115, 100]);
    expect(valueOf(cycleToCycleJitter(edges)).mostS).toBe(35);
    expect(valueOf(periodJitter(edges)).peakToPeakS).toBe(35);
  });

  it('time-interval error gives line and ramp back exactly', () => {
    const random = normal(seeded(8));
    const noise = Float64Array.from({ length: 400 }, () => 2e-6 * random());
    const ramp = noise.map((e, k) => 5000 + 1e-3 * k + 2e-8 * k * k + e);
    const fit = valueOf(timeIntervalError(ramp, 'drifting'));
    expect(fit.startS).toBeCloseTo(5000, 5);
    expect(fit.periodS / 1e-3).toBeCloseTo(1, 3);
    expect(fit.driftS / 4e-8).toBeCloseTo(1, 2);
    expect(Math.abs(fit.rmsS / 2e-6 - 1)).toBeLessThan(0.1);
    const straight = valueOf(timeIntervalError(ramp, 'even'));
    expect(straight.driftS).toBe(0);
    expect(straight.rmsS).toBeGreaterThan(100 * fit.rmsS);
    expect(fit.peakToPeakS).toBeGreaterThan(fit.rmsS);
  });

  it('a ramp without noise is read to the last digit: first instant, first period, drift', () => {
    const edges = Float64Array.from({ length: 9 }, (_, k) => 2 + 0.5 * k + 0.03 * k * k);
    const { startS, periodS, driftS, rmsS } = valueOf(timeIntervalError(edges, 'drifting'));
    expect(startS).toBeCloseTo(2, 12);
    expect(periodS).toBeCloseTo(edges[1]! - edges[0]!, 12);
    expect(driftS).toBeCloseTo(0.06, 12);
    expect(rmsS).toBeLessThan(1e-12);
  });

  it('without its trend a ramp of speed has the jitter of a steady shaft', () => {
    const random = normal(seeded(9));
    const ramp = passes(new Array<number>(30).fill(1 / 30), 10, 20, 0.4).map((t) => t + 1e-6 * random());
    expect(valueOf(periodJitter(ramp)).rmsS).toBeGreaterThan(3e-6);
    const flat = valueOf(withoutTrend(ramp));
    expect(Math.abs(valueOf(periodJitter(flat)).rmsS / (Math.SQRT2 * 1e-6) - 1)).toBeLessThan(0.1);
  });

  it('says why there is none', () => {
    expect(issueOf(periodJitter([]))).toBe('too-few');
    expect(issueOf(periodJitter([1]))).toBe('too-few');
    expect(issueOf(periodJitter([1, 1]))).toBe('not-ascending');
    expect(issueOf(cycleToCycleJitter([1, 2]))).toBe('too-few');
    expect(issueOf(timeIntervalError([1, 2, 3], 'drifting'))).toBe('too-few');
    expect(issueOf(withoutTrend([0, 1, NaN, 3]))).toBe('not-finite');
    expect(valueOf(periodJitter([0, 1])).sampleRmsS).toBe(0);
    expect(jitterShares(1e-5, 1e-3)).toEqual({ percent: 1, toothDeg: 3.6 });
  });
});
