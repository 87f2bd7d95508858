import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { leastSquares } from '@/signal/statistics/least-squares';
import { farthest, issueOf, valueOf } from '@/signal/statistics/test-values';

const column = (n: number, value: (k: number) => number) =>
  Float64Array.from({ length: n }, (_, k) => value(k));
const double = (min: number, max: number) => fc.double({ min, max, noNaN: true });

describe('least squares', () => {
  it('gives the textbook line: slope, intercept, both errors and the residual', () => {
    // x = 0..4, y = 1, 3, 2, 5, 4: mean 2 and 3, Sxx = 10, Sxy = 8, residuals squared 3.6 over 3 degrees of freedom.
    const fit = valueOf(leastSquares([column(5, () => 1), column(5, (k) => k)], [1, 3, 2, 5, 4]));
    expect(farthest(fit.x, [1.4, 0.8])).toBeLessThan(1e-12);
    expect(fit.residualRms).toBeCloseTo(Math.sqrt(3.6 / 3), 12);
    expect(farthest(fit.errorShares, [Math.sqrt(1 / 5 + 4 / 10), Math.sqrt(1 / 10)])).toBeLessThan(1e-12);
  });

  it('gives the coefficients of any exact mix back', () => {
    fc.assert(
      fc.property(
        double(-9, 9),
        double(-9, 9),
        double(-9, 9),
        fc.integer({ min: 3, max: 50 }),
        (a, b, c, n) => {
          const columns = [column(n, () => 1), column(n, (k) => k / n), column(n, (k) => Math.cos(k))];
          const y = column(n, (k) => a + (b * k) / n + c * Math.cos(k));
          const fit = valueOf(leastSquares(columns, y));
          expect(farthest(fit.x, [a, b, c])).toBeLessThan(1e-9);
          expect(fit.residualRms).toBeLessThan(1e-9);
        },
      ),
    );
  });

  it('leaves residuals that no column can lessen', () => {
    fc.assert(
      fc.property(fc.array(double(-9, 9), { minLength: 4, maxLength: 40 }), (y) => {
        const columns = [column(y.length, () => 1), column(y.length, (k) => k * k)];
        const { x } = valueOf(leastSquares(columns, y));
        for (const one of columns) {
          const left = y.reduce((sum, v, k) => sum + one[k]! * (v - x[0]! - x[1]! * k * k), 0);
          expect(Math.abs(left)).toBeLessThan(1e-8 * y.length ** 2);
        }
      }),
    );
  });

  it('says which unknown cannot be told, and what else is wrong', () => {
    const ones = column(5, () => 1);
    expect(issueOf(leastSquares([ones, column(5, () => 2)], [1, 2, 3, 4, 5]))).toBe('undetermined');
    expect(issueOf(leastSquares([new Float64Array(5)], [1, 2, 3, 4, 5]))).toBe('undetermined');
    expect(issueOf(leastSquares([ones], [1, 2]))).toBe('bad-setting');
    expect(issueOf(leastSquares([], []))).toBe('too-few');
    expect(issueOf(leastSquares([column(1, () => 1), column(1, () => 2)], [1]))).toBe('too-few');
    expect(issueOf(leastSquares([ones], [1, 2, NaN, 4, 5]))).toBe('not-finite');
    expect(valueOf(leastSquares([column(1, () => 2)], [3])).residualRms).toBe(0);
  });
});
