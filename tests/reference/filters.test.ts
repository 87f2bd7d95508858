/** All cases of `tests/fixtures/reference/filters.json` (scipy 1.10.1): response, delay, output from rest and primed. */
import { describe, expect, it } from 'vitest';
import { createCascade, primeCascade, runCascade } from '@/signal/biquad';
import { designFilter } from '@/signal/filter-design';
import type { Filter } from '@/signal/model';
import { phaseDelayS, responseAt } from '@/signal/response';
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

function offPeriods(periods: number): number {
  return Math.abs(periods - Math.round(periods));
}

describe('filters against scipy', () => {
  it('has all 64 cases', () => {
    expect(cases).toHaveLength(64);
  });

  it.each(cases.map((one) => [Object.values(one.spec).join(' '), one] as const))('%s', (_name, one) => {
    const { rateHz } = one.spec;
    const sections = designFilter(one.spec as unknown as Filter, rateHz);
    expect(sections).toHaveLength(one.sos.length);

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
