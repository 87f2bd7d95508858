/**
 * All cases of `tests/fixtures/reference/filters.json` (scipy 1.10.1): coefficients, response, phase and group delay, output
 * from rest and primed.
 */
import { describe, expect, it } from 'vitest';
import { createCascade, primeCascade, runCascade } from '@/signal/biquad';
import { designFilter } from '@/signal/filter-design';
import type { Filter } from '@/signal/model';
import { dcDelayS, phaseDelayS, responseAt } from '@/signal/response';
import reference from '../fixtures/reference/filters.json';

type Case = {
  spec: { kind: string; family: string; order: number; rateHz: number } & Record<string, unknown>;
  sos: number[][];
  zeroState: number[];
  primed: number[];
  responseHz: number[];
  magnitudeDb: number[];
  groupDelayS: number[];
  phaseDelayS: number[];
};

const cases = reference.cases as unknown as Case[];

/** H(z) of scipy's sections at `hz` by complex arithmetic, independent of our own response code. */
function sosResponse(sos: number[][], hz: number, rateHz: number): { magnitude: number; periods: number } {
  const w = (2 * Math.PI * hz) / rateHz;
  let magnitude = 1;
  let phase = 0;
  for (const [b0, b1, b2, a0, a1, a2] of sos as [number, number, number, number, number, number][]) {
    for (const [x, y, z, power] of [
      [b0, b1, b2, 1],
      [a0, a1, a2, -1],
    ] as const) {
      const re = x + y * Math.cos(w) + z * Math.cos(2 * w);
      const im = -y * Math.sin(w) - z * Math.sin(2 * w);
      magnitude *= Math.hypot(re, im) ** power;
      phase += power * Math.atan2(im, re);
    }
  }
  return { magnitude, periods: -phase / (2 * Math.PI) };
}

/** Sections multiplied out: what the filter is, whatever pairs of poles and zeros its sections were made of. */
function multipliedOut(parts: readonly (readonly number[])[]): number[] {
  return parts.reduce<number[]>(
    (product, part) => {
      const longer = new Array<number>(product.length + part.length - 1).fill(0);
      product.forEach((x, i) => part.forEach((y, j) => (longer[i + j] = longer[i + j]! + x * y)));
      return longer;
    },
    [1],
  );
}

/** Group delay of a polynomial in 1/z at `w` radians a sample: the real part of sum k p_k z^-k over sum p_k z^-k, samples. */
function polynomialDelay(coefficients: readonly number[], w: number): number {
  let [re, im, slopeRe, slopeIm] = [0, 0, 0, 0];
  coefficients.forEach((value, k) => {
    re += value * Math.cos(k * w);
    im -= value * Math.sin(k * w);
    slopeRe += k * value * Math.cos(k * w);
    slopeIm -= k * value * Math.sin(k * w);
  });
  return (slopeRe * re + slopeIm * im) / (re * re + im * im);
}

/** Section by section: where the gain is far below a millionth, the product of all of them is too small to divide by. */
function groupDelay(sections: readonly number[][], w: number): number {
  return sections.reduce(
    (sum, one) => sum + polynomialDelay(one.slice(0, 3), w) - polynomialDelay(one.slice(3), w),
    0,
  );
}

function offPeriods(periods: number): number {
  return Math.abs(periods - Math.round(periods));
}

describe('filters against scipy', () => {
  it('has all 64 cases', () => {
    expect(cases).toHaveLength(64);
    for (const one of cases) expect(one.groupDelayS).toHaveLength(one.responseHz.length);
  });

  it.each(cases.map((one) => [Object.values(one.spec).join(' '), one] as const))('%s', (_name, one) => {
    const { rateHz } = one.spec;
    const sections = designFilter(one.spec as unknown as Filter, rateHz);
    expect(sections).toHaveLength(one.sos.length);

    const own = sections.map(({ b0, b1, b2, a1, a2 }) => [b0, b1, b2, 1, a1, a2]);
    for (const [from, to] of [
      [0, 3],
      [3, 6],
    ] as const) {
      const wanted = multipliedOut(one.sos.map((section) => section.slice(from, to)));
      const got = multipliedOut(own.map((section) => section.slice(from, to)));
      const largest = Math.max(...wanted.map(Math.abs));
      expect(got).toHaveLength(wanted.length);
      got.forEach((value, k) => expect(Math.abs(value - wanted[k]!) / largest).toBeLessThan(1e-11));
    }

    one.responseHz.forEach((hz, k) => {
      const w = (2 * Math.PI * hz) / rateHz;
      const delay = groupDelay(own, w);
      expect(Math.abs(delay - one.groupDelayS[k]! * rateHz)).toBeLessThan(2e-5);
      expect(Math.abs(delay - groupDelay(one.sos, w))).toBeLessThan(1e-6);
    });
    if (one.spec.kind === 'lowpass') {
      // What the product takes off a slow signal: the group delay where the frequency goes to 0.
      const atRest = groupDelay(one.sos, 1e-9);
      expect(Math.abs(dcDelayS(sections, rateHz) * rateHz - atRest)).toBeLessThan(1e-6 * atRest);
    }

    one.responseHz.forEach((hz, k) => {
      const { magnitude } = responseAt(sections, hz, rateHz);
      if (one.magnitudeDb[k]! > -200) expect(20 * Math.log10(magnitude)).toBeCloseTo(one.magnitudeDb[k]!, 5);
    });
    for (let share = 0.01; share < 0.49; share += 0.03) {
      const hz = share * rateHz;
      const wanted = sosResponse(one.sos, hz, rateHz);
      expect(responseAt(sections, hz, rateHz).magnitude).toBeCloseTo(wanted.magnitude, 8);
      if (wanted.magnitude > 1e-6)
        expect(offPeriods(phaseDelayS(sections, hz, rateHz) * hz - wanted.periods)).toBeLessThan(1e-8);
    }

    one.responseHz.forEach((hz, k) => {
      if (one.magnitudeDb[k]! < -200) return;
      const periods = (phaseDelayS(sections, hz, rateHz) - one.phaseDelayS[k]!) * hz;
      // The file's phase delays were interpolated on a grid: they are off scipy's own response by up to 3.5e-5 of a period.
      // A filter that does not pass 0 Hz has no anchor there: its phase is compared modulo one period.
      expect(one.spec.kind === 'lowpass' ? Math.abs(periods) : offPeriods(periods)).toBeLessThan(5e-5);
    });

    for (const primed of [false, true]) {
      const cascade = createCascade(sections);
      const buffer = Float64Array.from(reference.input);
      if (primed) primeCascade(cascade, buffer[0]!);
      else cascade.primed = true;
      runCascade(cascade, buffer, 0, buffer.length);
      const wanted = primed ? one.primed : one.zeroState;
      wanted.forEach((value, k) => expect(Math.abs(buffer[9 * k]! - value)).toBeLessThan(1e-9));
    }
  });
});
