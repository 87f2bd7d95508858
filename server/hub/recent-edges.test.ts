import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { RecentMarks } from '@/server/hub/recent-edges';

describe('the newest marks of the rail', () => {
  it('gives and counts what lies in a stretch, however many came', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 5000 }),
        fc.double({ min: 0.001, max: 0.1, noNaN: true }),
        fc.double({ min: 0, max: 60, noNaN: true }),
        fc.double({ min: 0, max: 60, noNaN: true }),
        (count, stepS, backS, spanS) => {
          const marks = new RecentMarks();
          const all = Array.from({ length: count }, (_, i) => ({ t: i * stepS, flags: i % 3 }));
          for (const { t, flags } of all) marks.push(t, flags);
          const newestS = (count - 1) * stepS;
          const fromS = Math.max(0, newestS - backS);
          const wanted = all.filter(({ t }) => t >= fromS && t <= fromS + spanS);
          expect(marks.between(fromS, fromS + spanS)).toEqual(wanted);
          expect(marks.count(fromS, fromS + spanS)).toBe(wanted.length);
        },
      ),
      { numRuns: 100 },
    );
  });

  it('leaves out marks that fall on one place of the picture, but none of another kind', () => {
    const marks = new RecentMarks();
    for (let i = 0; i < 1000; i += 1) marks.push(i * 0.001, i % 2);
    const thin = marks.between(0, 1, 0.1);
    expect(thin.length).toBe(20);
    expect(new Set(thin.map(({ flags }) => flags))).toEqual(new Set([0, 1]));
    expect(marks.count(0, 1)).toBe(1000);
  });
});
