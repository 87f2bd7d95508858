import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { accelerations, fitAcceleration } from '@/signal/statistics/acceleration';
import { gateSpeed, lineSpeed, rpmOfCounts } from '@/signal/statistics/least-squares-speed';
import { countResolution, gateResolution, periodResolution } from '@/signal/statistics/speed-resolution';
import { issueOf, passes, valueOf } from '@/signal/statistics/test-values';
import { normal, seeded } from '@/signal/test-signals';

const double = (min: number, max: number) => fc.double({ min, max, noNaN: true });
const even = (n: number) => new Array<number>(n).fill(1 / n);

describe('speed over a window', () => {
  it('is exact for a steady shaft, by the ends of a gate and by the line', () => {
    fc.assert(
      fc.property(double(0.5, 200), fc.integer({ min: 1, max: 90 }), double(0, 1e5), (revPerS, n, startS) => {
        const edges = passes(even(n), 4, revPerS, 0, startS);
        const rpm = 60 * revPerS;
        const most = rpm * 1e-6;
        expect(Math.abs(valueOf(gateSpeed(edges, 1.5 / revPerS, n)).rpm - rpm)).toBeLessThan(most);
        expect(Math.abs(valueOf(lineSpeed(edges, null, n, 1e-6)).rpm - rpm)).toBeLessThan(most);
      }),
    );
  });

  it('has the sign of the places, skips what they skip, and refuses a reversal', () => {
    const reverse = valueOf(lineSpeed([0, 0.1, 0.2, 0.5], [9, 8, 7, 4], 10, 1e-6));
    expect(reverse.rpm).toBeCloseTo(-60, 9);
    expect(reverse.errorRpm).toBeGreaterThan(0);
    expect(reverse.residualRmsS).toBeLessThan(1e-12);
    expect(reverse.atS).toBeCloseTo(0.2, 12);
    expect(issueOf(lineSpeed([0, 1, 2, 3, 4], [0, 1, 2, 1, 0], 10, 1e-6))).toBe('undetermined');
    expect(issueOf(lineSpeed([0, 1, 2], [5, 5, 5], 10, 1e-6))).toBe('undetermined');
  });

  it('states its error honestly: the truth lies within two of it in 95 % of cases, noise told or not', () => {
    const random = normal(seeded(21));
    let told = 0;
    let found = 0;
    const runs = 4000;
    for (let run = 0; run < runs; run++) {
      const edges = Float64Array.from({ length: 31 }, (_, k) => k * 1e-3 + 4e-6 * random());
      const a = valueOf(lineSpeed(edges, null, 60, 4e-6));
      const b = valueOf(lineSpeed(edges, null, 60));
      if (Math.abs(a.rpm - 1000) <= 2 * a.errorRpm) told++;
      if (Math.abs(b.rpm - 1000) <= 2 * b.errorRpm) found++;
    }
    expect(told / runs).toBeGreaterThan(0.945);
    expect(found / runs).toBeGreaterThan(0.935);
    expect(told / runs).toBeLessThan(0.97);
  });

  it('says why there is none', () => {
    expect(issueOf(gateSpeed([0, 0.1], 0.2, 4))).toBe('too-few');
    expect(issueOf(gateSpeed([0], 0.2, 4))).toBe('too-few');
    expect(issueOf(gateSpeed([0, 1], 0, 4))).toBe('bad-setting');
    expect(issueOf(gateSpeed([0, 1], 1, 0))).toBe('bad-setting');
    expect(issueOf(lineSpeed([0, 1], null, 4))).toBe('too-few');
    expect(issueOf(lineSpeed([0, 1], [0, 1, 2], 4, 0))).toBe('bad-setting');
    expect(issueOf(lineSpeed([0, 1], null, 4, -1))).toBe('bad-setting');
    expect(issueOf(rpmOfCounts(5, 0, 1e6, 60))).toBe('bad-setting');
    expect(issueOf(periodResolution(1e9, 60, 1e6, 1))).toBe('too-few');
    expect(issueOf(gateResolution(1000, 60, 10, 0.1, 1))).toBe('too-few');
  });

  it('delay and floor: half the gate, half the period; one edge a gate, the stop time', () => {
    expect(valueOf(countResolution(0.2, 30))).toEqual({ stepRpm: 10, delayS: 0.1, floorRpm: 10 });
    expect(valueOf(periodResolution(600, 10, 1e6, 2))).toMatchObject({ delayS: 0.005, floorRpm: 3 });
    expect(valueOf(gateResolution(600, 10, 1e6, 0.025, 2))).toMatchObject({ delayS: 0.015, floorRpm: 3 });
    expect(valueOf(gateResolution(100, 10, 100, 0.1, 2)).stepRpm).toBeCloseTo(100 / 9, 9);
    expect(valueOf(gateResolution(600, 10, 1e6, 0.03, 2)).delayS).toBeCloseTo(0.015, 12);
  });
});

describe('acceleration', () => {
  it('is exact for an even one, from three edges and from the fit', () => {
    fc.assert(
      fc.property(double(5, 50), double(-2, 2), fc.integer({ min: 4, max: 60 }), (revPerS, alpha, n) => {
        const edges = passes(even(n), 2, revPerS, alpha, 7);
        const radPerS2 = 2 * Math.PI * alpha;
        for (const found of valueOf(accelerations(edges, (2 * Math.PI) / n)))
          expect(Math.abs(found - radPerS2)).toBeLessThan(1e-4);
        const fit = valueOf(fitAcceleration(edges, (2 * Math.PI) / n));
        expect(Math.abs(fit.alphaRadPerS2 - radPerS2)).toBeLessThan(1e-6);
        const end = edges[edges.length - 1]! - 7;
        expect(Math.abs(fit.endRadPerS - 2 * Math.PI * (revPerS + alpha * end))).toBeLessThan(1e-6);
      }),
    );
  });

  it('of a turn is far quieter than of three edges, and its error is honest', () => {
    const random = normal(seeded(25));
    let inside = 0;
    let squares = 0;
    const runs = 1000;
    for (let run = 0; run < runs; run++) {
      const edges = passes(even(36), 1, 20, 2).map((t) => t + 1e-6 * random());
      const { alphaRadPerS2, alphaError } = valueOf(fitAcceleration(edges, Math.PI / 18));
      if (Math.abs(alphaRadPerS2 - 4 * Math.PI) <= 2 * alphaError) inside++;
      squares += (alphaRadPerS2 - 4 * Math.PI) ** 2 / runs;
    }
    expect(inside / runs).toBeGreaterThan(0.93);
    expect(Math.sqrt(squares)).toBeLessThan(1);
  });

  it('says why there is none', () => {
    expect(issueOf(accelerations([0, 1], 1))).toBe('too-few');
    expect(issueOf(accelerations([0, 1, 2], [1]))).toBe('bad-setting');
    expect(issueOf(accelerations([0, 1, 2], [1, 0]))).toBe('bad-setting');
    expect(issueOf(fitAcceleration([0, 1, 2], 3))).toBe('too-few');
    expect(issueOf(fitAcceleration([0, 1, 2, 3], 1))).toBe('too-few');
    expect(issueOf(fitAcceleration([0, 1, 2, 2], 3))).toBe('not-ascending');
  });
});
