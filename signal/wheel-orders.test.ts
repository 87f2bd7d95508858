import { describe, expect, it } from 'vitest';
import { orderSpectrum } from '@/signal/statistics/order-spectrum';
import { normal, seeded } from '@/signal/test-signals';
import { middleMagnitude, WheelOrders } from '@/signal/wheel-orders';

const wave = (n: number) =>
  Float64Array.from(
    { length: n },
    (_, k) => 3 + 0.5 * Math.cos((2 * Math.PI * k) / n - 1) + 0.2 * Math.sin((4 * Math.PI * k) / n),
  );

describe('the low orders of a wheel', () => {
  it('are those of the order spectrum on a full turn', () => {
    const random = normal(seeded(1));
    const values = wave(37).map((value) => value + 0.1 * random());
    const orders = new WheelOrders(37, 3);
    orders.fit(values, 3);
    const spectrum = orderSpectrum(values, 37);
    if (!spectrum.ok) throw new Error(spectrum.issue.detail);
    expect(orders.mean).toBeCloseTo(spectrum.value.mean, 12);
    for (const r of [1, 2, 3]) expect(orders.amplitude(r)).toBeCloseTo(spectrum.value.amplitude[r]!, 12);
    const energy = spectrum.value.amplitude.reduce((sum, a, r) => sum + (r > 0 ? (a * a) / 2 : 0), 0);
    expect(orders.variance).toBeCloseTo(energy, 12);
  });

  it('are not harmed by positions without a value, nor by one that is set apart', () => {
    const values = wave(24);
    values[20] = values[21] = values[22] = values[23] = NaN;
    values[7] = 9;
    const apart = new Uint8Array(24);
    apart[7] = 1;
    const orders = new WheelOrders(24, 2);
    orders.fit(values, 2, apart);
    expect(orders.count).toBe(19);
    expect(orders.amplitude(1)).toBeCloseTo(0.5, 3);
    expect(orders.amplitude(2)).toBeCloseTo(0.2, 3);
    expect(orders.mean).toBeCloseTo(3, 3);
    expect(orders.left[7]).toBeCloseTo(9 - wave(24)[7]!, 2);
    expect(orders.left[21]).toBeNaN();
    expect(Math.sqrt(orders.leftVariance)).toBeLessThan(1e-3);
  });

  it('take the highest order of an even wheel, which has no sine', () => {
    const orders = new WheelOrders(4, 2);
    orders.fit(Float64Array.of(1, -1, 1, -1), 2);
    expect(orders.amplitude(2)).toBeCloseTo(1, 12);
    expect(orders.leftVariance).toBeCloseTo(0, 12);
  });
});

describe('the middle magnitude', () => {
  it('leaves out what is not known', () => {
    expect(middleMagnitude([5, NaN, -1, 3], new Float64Array(4))).toBe(3);
    expect(middleMagnitude([NaN], new Float64Array(1))).toBeNaN();
  });
});
