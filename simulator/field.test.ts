import { describe, expect, it } from 'vitest';
import { axialFieldMt, createMagnetProfile, slideByFieldMt } from '@/simulator/cylinder-field';
import { createPoleField, gapDecay, poleHarmonicMt } from '@/simulator/pole-ring-field';

const ring = { pairLengthMm: 6, thicknessMm: 2, remanenceT: 0.24 };
const cylinder = { diameterMm: 5, lengthMm: 3, remanenceT: 1.3 };

describe('pole ring', () => {
  it('has the harmonics and the decay of a summed strip', () => {
    expect(poleHarmonicMt(ring, 1, 1)).toBeCloseTo(47.014, 3);
    expect(poleHarmonicMt(ring, 3, 1)).toBeCloseTo(2.19676, 4);
    expect(gapDecay(6, 1)).toBeCloseTo(0.35092, 5);
    expect(20 * Math.log10(gapDecay(6, 1))).toBeCloseTo(-9.0958, 3);
  });

  it('has its first three harmonics with the signs of a square wave', () => {
    const field = createPoleField(ring);
    for (const phase of [0, 0.1, 0.25, 0.4, 0.77]) {
      const series = [1, 3, 5].reduce(
        (sum, k) => sum + poleHarmonicMt(ring, k, 0.8) * Math.sin(2 * Math.PI * k * phase),
        0,
      );
      expect(field(phase, 0.8)).toBeCloseTo(series, 9);
    }
    // Peak over the pole with all harmonics at 1 mm: 44.97 mT.
    expect(field(0.25, 1)).toBeCloseTo(44.97, 1);
  });
});

describe('cylinder magnet', () => {
  it('has the field on its axis', () => {
    expect(axialFieldMt(cylinder, 2)).toBeCloseTo(175.3259, 3);
    expect(axialFieldMt(cylinder, 5)).toBeCloseTo(39.0343, 3);
    expect(axialFieldMt(cylinder, 10)).toBeCloseTo(7.71157, 4);
  });

  it('has the exact field beside its axis, the opposite lobe included', () => {
    const table: [number, number][] = [
      [0, 175.326],
      [1, 159.835],
      [2, 114.229],
      [2.5, 84.696],
      [3, 56.778],
      [5, 2.261],
      [6, -3.341],
      [8, -4.627],
    ];
    for (const [offsetMm, fieldMt] of table)
      expect(slideByFieldMt(cylinder, 2, offsetMm)).toBeCloseTo(fieldMt, 3);
  });

  it('interpolates closely enough between the computed rows', () => {
    const profile = createMagnetProfile(cylinder);
    for (const [offset, gap] of [
      [0.512, 1.333],
      [3.077, 2.018],
      [6.66, 2.49],
    ] as const) {
      expect(Math.abs(profile(offset, gap) - slideByFieldMt(cylinder, gap, offset))).toBeLessThan(0.15);
    }
  });
});
