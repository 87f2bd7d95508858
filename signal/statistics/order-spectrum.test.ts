import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { orderSpectrum } from '@/signal/statistics/order-spectrum';
import { speedPerTurn } from '@/signal/statistics/per-turn';
import { farthest, issueOf, passes, valueOf } from '@/signal/statistics/test-values';

const column = (n: number, turns: number, value: (k: number) => number) =>
  Array.from({ length: n * turns }, (_, i) => value(i % n));

describe('orders of a turn', () => {
  it('finds a single order with its amplitude and phase, and nothing else', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 3, max: 120 }),
        fc.nat(),
        fc.double({ min: 0.01, max: 1, noNaN: true }),
        fc.double({ min: -3, max: 3, noNaN: true }),
        (n, pick, amplitude, phase) => {
          const order = 1 + (pick % Math.floor((n - 1) / 2));
          const found = valueOf(
            orderSpectrum(
              column(n, 3, (k) => 2 + amplitude * Math.cos((2 * Math.PI * order * k) / n + phase)),
              n,
            ),
          );
          expect(found.turns).toBe(3);
          const wanted = found.amplitude.map((_, r) => (r === 0 ? 2 : r === order ? amplitude : 0));
          expect(farthest(found.amplitude, wanted)).toBeLessThan(1e-9);
          expect(Math.abs(found.phaseRad[order]! - phase)).toBeLessThan(1e-9);
        },
      ),
    );
  });

  it('names run-out, ellipse and alternating teeth as shares of the mean', () => {
    const swing = column(
      12,
      4,
      (k) => 2 * (1 + 0.15 * Math.cos((2 * Math.PI * k) / 12 + 1) + 0.02 * (-1) ** k),
    );
    const { mean, amplitude } = valueOf(orderSpectrum(swing, 12));
    expect(mean).toBeCloseTo(2, 9);
    expect(amplitude[1]! / mean).toBeCloseTo(0.15, 9);
    expect(amplitude[2]! / mean).toBeCloseTo(0, 9);
    expect(amplitude[6]! / mean).toBeCloseTo(0.02, 9);
  });

  it('averages what does not belong to the wheel away', () => {
    const turns = 64;
    const beat = Array.from(
      { length: 16 * turns },
      (_, i) => 1 + 0.3 * Math.cos((2 * Math.PI * i) / 16 / 3.5),
    );
    const { amplitude } = valueOf(orderSpectrum(beat, 16));
    expect(Math.max(...amplitude.subarray(1))).toBeLessThan(0.01);
  });

  it('fills the gap of a wheel between its neighbours, and says how much', () => {
    const swing = column(60, 2, (k) => (k > 57 ? NaN : 1 + 0.1 * Math.cos((2 * Math.PI * k) / 60)));
    const found = valueOf(orderSpectrum(swing, 60));
    expect(found.filled).toBe(2);
    expect(found.amplitude[1]!).toBeCloseTo(0.1, 3);
  });

  it('says why there is no spectrum', () => {
    expect(issueOf(orderSpectrum([], 4))).toBe('too-few');
    expect(issueOf(orderSpectrum([1, 2, 3], 4))).toBe('too-few');
    expect(issueOf(orderSpectrum([1, 2, 3], 1))).toBe('bad-setting');
    expect(issueOf(orderSpectrum([NaN, NaN, 1, 1], 4))).toBe('too-few');
    expect(issueOf(orderSpectrum([NaN, NaN], 2))).toBe('too-few');
    expect(issueOf(orderSpectrum([1, Infinity, 2, 3], 4))).toBe('not-finite');
    expect(issueOf(orderSpectrum([1, 2, NaN, 3, 1, 2, 3, 4], 4))).toBe('not-finite');
  });
});

describe('columns a turn', () => {
  it('speed of whole turns does not see uneven teeth, and the gear counts', () => {
    const teeth = passes([0.3, 0.2, 0.28, 0.22], 3, 20);
    const speeds = valueOf(speedPerTurn(teeth, 4, 2));
    expect(farthest(speeds.rpm, [600, 600, 600])).toBeLessThan(1e-9);
    expect(farthest(speeds.endS, [0.05, 0.1, 0.15])).toBeLessThan(1e-12);
    expect(issueOf(speedPerTurn(teeth.subarray(0, 4), 4))).toBe('too-few');
    expect(issueOf(speedPerTurn(teeth, 4, 0))).toBe('bad-setting');
  });
});
