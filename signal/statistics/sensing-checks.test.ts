import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { WidthClass } from '@/signal/model';
import {
  fieldScale,
  linearSpanMt,
  milliteslaOf,
  milliteslaOfSwing,
  remanenceFactor,
  voltsOf,
} from '@/signal/statistics/field';
import { checkIndex } from '@/signal/statistics/index-check';
import { quadratureLimitRpm, quadraturePhase, stateWidths } from '@/signal/statistics/quadrature-phase';
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

describe('counts at the index', () => {
  it('tell lost and extra counts apart, either way round, and leave reversals out', () => {
    const found = valueOf(checkIndex([0, 64, 127, 193, 129, 129, 65], 64, [0, 0, 0, 0, 1, 0]));
    expect(found.verdicts).toEqual(['exact', 'lost', 'extra', 'exact', 'not-judged', 'exact']);
    expect([...found.excess]).toEqual([0, -1, 2, 0, 0, 0]);
    expect(found).toMatchObject({ judged: 5, exact: 3, lostCounts: 1, extraCounts: 2 });
    expect(found.commonest).toEqual({ counts: 64, share: 0.6 });
  });

  it('find the wheel that is there where another is set up', () => {
    expect(valueOf(checkIndex([0, 120, 240, 360], 60)).commonest).toEqual({ counts: 120, share: 1 });
    expect(valueOf(checkIndex([0, 60], 60, [true])).commonest).toBe(null);
    expect(issueOf(checkIndex([0], 60))).toBe('too-few');
    expect(issueOf(checkIndex([0, 60], 0))).toBe('bad-setting');
    expect(issueOf(checkIndex([0, NaN], 60))).toBe('not-finite');
    expect(issueOf(checkIndex([0, 60], 60, []))).toBe('bad-setting');
  });
});

describe('phase of two switched channels', () => {
  it('is measured through a wrap and a changing speed, its error the same in both directions', () => {
    fc.assert(
      fc.property(fc.double({ min: -80, max: 80, noNaN: true }), fc.boolean(), (errorDeg, forward) => {
        const phase = (forward ? 90 + errorDeg : 270 - errorDeg) / 360;
        const at = (place: number) => 5 + 0.01 * place + 1e-6 * place * place;
        const a = Array.from({ length: 40 }, (_, k) => at(k));
        const b = Array.from({ length: 42 }, (_, k) => at(k - 1 + phase));
        const found = valueOf(quadraturePhase(a, b, forward ? 'forward' : 'reverse'));
        expect(found.periods).toBe(39);
        expect(Math.abs(found.errorDeg - errorDeg)).toBeLessThan(0.05);
        expect(found.scatterDeg).toBeLessThan(0.1);
      }),
    );
  });

  it('of channels that are not locked is none, and lost edges drop out', () => {
    const a = Array.from({ length: 60 }, (_, k) => k);
    expect(
      issueOf(
        quadraturePhase(
          a,
          a.map((t) => 0.01 + t * 1.0371),
          'forward',
        ),
      ),
    ).toBe('undetermined');
    expect(issueOf(quadraturePhase(a, [100], 'forward'))).toBe('too-few');
    expect(issueOf(quadraturePhase([1], [1], 'forward'))).toBe('too-few');
    const lossy = a.map((t) => t + 0.25).filter((_, k) => k % 5 !== 0);
    expect(valueOf(quadraturePhase(a, lossy, 'forward'))).toMatchObject({
      phaseDeg: 90,
      errorDeg: 0,
      periods: 47,
    });
  });

  it('gives state widths that add up to a turn of the tooth, as the formulas for motion forward say', () => {
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
    expect(issueOf(quadratureLimitRpm(10_000, 64, 0))).toBe('undetermined');
    expect(issueOf(quadratureLimitRpm(0, 64))).toBe('bad-setting');
  });
});

describe('field', () => {
  const sensor = { sensitivityMvPerMt: 25, nominalSupplyV: 5, supplyV: 5, quiescentV: null };

  it('and voltage are each other turned round, with either sign of sensitivity', () => {
    fc.assert(
      fc.property(fc.double({ min: -200, max: 200, noNaN: true }), fc.boolean(), (mt, falls) => {
        const scale = valueOf(fieldScale({ ...sensor, sensitivityMvPerMt: falls ? -25 : 25 }));
        expect(milliteslaOf(voltsOf(mt, scale), scale)).toBeCloseTo(mt, 9);
        expect(milliteslaOfSwing(0.5, scale)).toBeCloseTo(20, 9);
      }),
    );
  });

  it('rests where it is said to, and spans about -88 to 88 mT between rails of 0.3 and 4.7 V', () => {
    const scale = valueOf(fieldScale(sensor));
    expect(voltsOf(60, scale)).toBeCloseTo(4, 12);
    const span = valueOf(linearSpanMt(scale, 0.3, 4.7));
    expect(span.leastMt).toBeCloseTo(-88, 9);
    expect(span.mostMt).toBeCloseTo(88, 9);
    const fixed = valueOf(
      fieldScale({ sensitivityMvPerMt: 30, nominalSupplyV: null, supplyV: null, quiescentV: 1.65 }),
    );
    expect(milliteslaOf(1.95, fixed)).toBeCloseTo(10, 9);
    expect(issueOf(linearSpanMt(scale, 3, 4.7))).toBe('bad-setting');
    expect(issueOf(fieldScale({ ...sensor, supplyV: null }))).toBe('bad-setting');
    expect(issueOf(fieldScale({ ...sensor, supplyV: 0 }))).toBe('bad-setting');
    expect(issueOf(fieldScale({ ...sensor, quiescentV: NaN }))).toBe('bad-setting');
    expect(issueOf(remanenceFactor(-2, 60))).toBe('undetermined');
  });
});
