import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { WidthClass } from '@/signal/model';
import { fieldScale, milliteslaOfSwing, remanenceFactor, voltsOf } from '@/signal/statistics/field';
import { stateWidths } from '@/signal/statistics/quadrature-phase';
import { issueOf, valueOf } from '@/signal/statistics/test-values';
import { classifyWidths, cutShort, neededRateHz, noClass } from '@/signal/statistics/width-code';

const ladder: WidthClass[] = [
  { widthS: 45e-6, means: 'weak' },
  { widthS: 90e-6, means: 'forward' },
  { widthS: 180e-6, means: 'reverse' },
];

describe('widths', () => {
  it('go to the nearest class by ratio, within a quarter', () => {
    const widths = [45, 47, 90, 112, 113, 180, 150, 143, 30, 400].map((us) => us * 1e-6);
    const found = valueOf(
      classifyWidths(
        widths,
        widths.map(() => 0.01),
        ladder,
        null,
      ),
    );
    expect([...found.index]).toEqual([0, 0, 1, 1, noClass, 2, 2, noClass, noClass, noClass]);
    expect([...found.direction]).toEqual([0, 0, 1, 1, 0, -1, -1, 0, 0, 0]);
    expect(found.counts).toEqual([2, 2, 2]);
    expect(found.unmatched).toBe(4);
  });

  it('accept any class within a ratio of 1.25 and none beyond it', () => {
    fc.assert(
      fc.property(fc.nat(2), fc.double({ min: -1.6, max: 1.6, noNaN: true }), (at, off) => {
        fc.pre(Math.abs(Math.abs(off) - 1) > 1e-9);
        const widthS = ladder[at]!.widthS * 1.25 ** off;
        const [index] = valueOf(classifyWidths([widthS], [Infinity], ladder, null)).index;
        expect(index).toBe(Math.abs(off) <= 1 ? at : noClass);
      }),
    );
  });

  it('are in no class where they fill more than half of the period', () => {
    const found = valueOf(classifyWidths([90e-6, 90e-6], [180e-6, 179e-6], ladder, 1e6));
    expect([...found.index]).toEqual([1, cutShort]);
    expect(found.cutShort).toBe(1);
  });

  it('are refused below four samples in the narrowest: 88 889 a second for 45 us', () => {
    expect(valueOf(neededRateHz(ladder))).toBeCloseTo(88_888.9, 1);
    expect(issueOf(classifyWidths([90e-6], [1e-3], ladder, 10_000))).toBe('rate-too-low');
    expect(issueOf(classifyWidths([90e-6], [1e-3], ladder, 89_000))).toBe(null);
    expect(issueOf(classifyWidths([90e-6], [1e-3], [], 1e6))).toBe('bad-setting');
    expect(
      issueOf(classifyWidths([90e-6], [1e-3], [ladder[0]!, { widthS: 50e-6, means: 'forward' }], 1e6)),
    ).toBe('bad-setting');
    expect(issueOf(classifyWidths([0], [1e-3], ladder, 1e6))).toBe('not-finite');
    expect(issueOf(classifyWidths([1e-3], [9e-4], ladder, 1e6))).toBe('not-finite');
    expect(issueOf(classifyWidths([1e-3], [], ladder, 1e6))).toBe('bad-setting');
  });
});

describe('states of two switched channels', () => {
  it('have widths that add up to a turn of the tooth, as the formulas for motion forward say', () => {
    const double = (min: number, max: number) => fc.double({ min, max, noNaN: true });
    fc.assert(
      fc.property(double(-720, 720), double(0, 1), double(0, 1), (phase, dutyA, dutyB) => {
        const { aOnlyDeg, bothDeg, bOnlyDeg, noneDeg, narrowestDeg } = valueOf(
          stateWidths(phase, dutyA, dutyB),
        );
        const all = [aOnlyDeg, bothDeg, bOnlyDeg, noneDeg];
        expect(all.reduce((sum, deg) => sum + deg, 0)).toBeCloseTo(360, 9);
        for (const deg of all) expect(deg).toBeGreaterThan(-1e-9);
        expect(narrowestDeg).toBeCloseTo(Math.max(0, Math.min(...all)), 9);
      }),
    );
    fc.assert(
      fc.property(double(60, 120), double(0.45, 0.55), double(0.45, 0.55), (phase, dutyA, dutyB) => {
        const widths = valueOf(stateWidths(phase, dutyA, dutyB));
        expect(widths.aOnlyDeg).toBeCloseTo(phase, 9);
        expect(widths.bothDeg).toBeCloseTo(360 * dutyA - phase, 9);
        expect(widths.bOnlyDeg).toBeCloseTo(phase + 360 * (dutyB - dutyA), 9);
        expect(widths.noneDeg).toBeCloseTo(360 - phase - 360 * dutyB, 9);
      }),
    );
    expect(valueOf(stateWidths(270, 0.5, 0.5)).narrowestDeg).toBe(90);
    expect(issueOf(stateWidths(90, 1.1, 0.5))).toBe('bad-setting');
    expect(issueOf(stateWidths(NaN, 0.5, 0.5))).toBe('bad-setting');
  });
});

describe('field', () => {
  const sensor = { sensitivityMvPerMt: 25, nominalSupplyV: 5, supplyV: 5, quiescentV: null };

  it('and voltage belong together, with either sign of sensitivity', () => {
    fc.assert(
      fc.property(fc.double({ min: -200, max: 200, noNaN: true }), fc.boolean(), (mt, falls) => {
        const scale = valueOf(fieldScale({ ...sensor, sensitivityMvPerMt: falls ? -25 : 25 }));
        const swing = Math.abs(voltsOf(mt, scale) - voltsOf(0, scale));
        expect(milliteslaOfSwing(swing, scale)).toBeCloseTo(Math.abs(mt), 9);
        expect(milliteslaOfSwing(0.5, scale)).toBeCloseTo(20, 9);
      }),
    );
  });

  it('rests where it is said to', () => {
    const scale = valueOf(fieldScale(sensor));
    expect(voltsOf(60, scale)).toBeCloseTo(4, 12);
    expect(voltsOf(0, scale)).toBe(2.5);
    const fixed = valueOf(
      fieldScale({ sensitivityMvPerMt: 30, nominalSupplyV: null, supplyV: null, quiescentV: 1.65 }),
    );
    expect(voltsOf(10, fixed)).toBeCloseTo(1.95, 9);
    expect(issueOf(fieldScale({ ...sensor, supplyV: null }))).toBe('bad-setting');
    expect(issueOf(fieldScale({ ...sensor, supplyV: 0 }))).toBe('bad-setting');
    expect(issueOf(fieldScale({ ...sensor, quiescentV: NaN }))).toBe('bad-setting');
    expect(issueOf(remanenceFactor(-2, 60))).toBe('undetermined');
  });
});
