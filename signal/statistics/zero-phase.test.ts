import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { designFilter, type Section } from '@/signal/filter-design';
import type { Filter, FilterOrder } from '@/signal/model';
import { responseAt } from '@/signal/response';
import { toneOf } from '@/signal/statistics/goertzel';
import { farthest, issueOf, valueOf } from '@/signal/statistics/test-values';
import { filterZeroPhase, memorySamples } from '@/signal/statistics/zero-phase';
import { sampled } from '@/signal/test-signals';

const rateHz = 1000;
const filters: Filter[] = [
  { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 60 },
  { kind: 'lowpass', family: 'bessel', order: 6, cutoffHz: 40 },
  { kind: 'lowpass', family: 'butterworth', order: 2, cutoffHz: 2 },
  { kind: 'highpass', family: 'butterworth', order: 2, cutoffHz: 5 },
  { kind: 'bandpass', family: 'butterworth', order: 4, lowHz: 20, highHz: 120 },
  { kind: 'notch', family: 'butterworth', order: 2, lowHz: 45, highHz: 55 },
];

describe('forward and backward', () => {
  it.each(filters)('no phase and the squared gain for a sine, to within its ends: %o', (filter) => {
    const sections = designFilter(filter, rateHz);
    for (const hz of [7, 30, 50, 90]) {
      const volts = sampled(4000, rateHz, (t) => Math.cos(2 * Math.PI * hz * t + 0.6));
      const out = valueOf(filterZeroPhase(volts, sections));
      const gain = responseAt(sections, hz, rateHz).magnitude ** 2;
      const { amplitude, phaseRad } = valueOf(toneOf(out.subarray(1000, 3000), rateHz, hz));
      expect(Math.abs(amplitude - gain)).toBeLessThan(1e-3 * gain + 1e-4);
      if (gain > 0.01) expect(Math.abs(phaseRad - 0.6)).toBeLessThan(2e-3);
    }
  });

  it.each(filters)('a pulse stays symmetric about its middle: %o', (filter) => {
    const volts = new Float64Array(3001);
    volts.fill(1, 1480, 1521);
    const out = valueOf(filterZeroPhase(volts, designFilter(filter, rateHz)));
    expect(farthest(out, out.slice().reverse())).toBeLessThan(1e-6);
    expect(Math.max(...out.map(Math.abs))).toBeGreaterThan(0.001);
  });

  it('a record turned round in time comes out turned round, whatever it is', () => {
    const sections = designFilter(filters[0]!, rateHz);
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: -5, max: 5, noNaN: true }), { minLength: 300, maxLength: 400 }),
        (volts) => {
          const there = valueOf(filterZeroPhase(volts, sections));
          const back = valueOf(filterZeroPhase(volts.slice().reverse(), sections));
          // The two orders of passes differ only by what the ends have not forgotten.
          expect(farthest(there, back.reverse())).toBeLessThan(1e-2);
        },
      ),
      { numRuns: 40 },
    );
  });

  it('leaves a constant, and for a low pass a straight line, as it is, ends included', () => {
    const orders: FilterOrder[] = [2, 4, 6, 8];
    for (const order of orders) {
      const sections = designFilter({ kind: 'lowpass', family: 'butterworth', order, cutoffHz: 50 }, rateHz);
      const flat = new Float64Array(500).fill(2.5);
      expect(farthest(valueOf(filterZeroPhase(flat, sections)), flat)).toBeLessThan(1e-9);
      const line = flat.map((v, k) => v + 0.01 * k);
      expect(farthest(valueOf(filterZeroPhase(line, sections)), line)).toBeLessThan(1e-3);
    }
  });

  it('does not move the edges of a pulse train: mid crossings stay within a hundredth of a sample', () => {
    const volts = sampled(2000, rateHz, (t) => (Math.sin(2 * Math.PI * 5 * t + 0.2) > 0 ? 1 : 0));
    const out = valueOf(filterZeroPhase(volts, designFilter(filters[0]!, rateHz)));
    let crossings = 0;
    for (let k = 300; k < 1700; k++) {
      if (volts[k]! === volts[k + 1]!) continue;
      crossings++;
      const place = (0.5 - out[k]!) / (out[k + 1]! - out[k]!);
      expect(Math.abs(place - 0.5)).toBeLessThan(0.01);
    }
    expect(crossings).toBe(14);
  });

  it('takes any length from two samples on, and an empty chain', () => {
    const sections = designFilter(filters[0]!, rateHz);
    for (const n of [2, 3, 10])
      expect(valueOf(filterZeroPhase(new Float64Array(n).fill(1), sections))).toHaveLength(n);
    expect([...valueOf(filterZeroPhase([1, 2, 3], []))]).toEqual([1, 2, 3]);
    expect(valueOf(filterZeroPhase([], sections))).toHaveLength(0);
    expect(issueOf(filterZeroPhase([1], sections))).toBe('too-few');
    expect(issueOf(filterZeroPhase([1, NaN], sections))).toBe('not-finite');
    expect(issueOf(filterZeroPhase([1, 2], sections, -1))).toBe('bad-setting');
    const unstable: Section = { b0: 1, b1: 0, b2: 0, a1: -2, a2: 1.01 };
    expect(issueOf(filterZeroPhase([1, 2], [unstable]))).toBe('bad-setting');
    expect(valueOf(memorySamples([]))).toBe(0);
    expect(valueOf(memorySamples(designFilter(filters[2]!, rateHz)))).toBeGreaterThan(500);
  });
});
