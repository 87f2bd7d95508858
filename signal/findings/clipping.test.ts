import { describe, expect, it } from 'vitest';
import { watchFindings } from '@/signal/findings/test-watch';
import type { Watched } from '@/signal/findings/test-watch';
import type { Channel, SampleArray } from '@/signal/model';
import { normal, sampled, seeded, testChannel, testRig } from '@/signal/test-signals';

const rateHz = 10_000;
const cut = (low: number, high: number, volts: number): number => Math.min(high, Math.max(low, volts));
/** 12 bits over 3.3 V. */
const codes = (volts: Float64Array): Int16Array =>
  Int16Array.from(volts, (v) => cut(0, 4095, Math.round((v / 3.3) * 4096)));
const converter: Partial<Channel> = { minCode: 0, maxCode: 4095, voltsPerCode: 3.3 / 4096 };

function clips(array: SampleArray, more: Partial<Channel> = {}, hz = rateHz): Watched[] {
  const rig = testRig('single', 8, 0, { channels: [testChannel('A', 'A', more)] });
  return watchFindings(rig, hz, {}, array).filter(({ code }) => code === 'clipping');
}

/** A sine about 1.65 V, cut at the ends, with noise that is cut with it. */
function sine(hz: number, high: (t: number) => number, ends: [number, number], seconds = 8, rate = rateHz) {
  const noise = normal(seeded(4));
  return sampled(seconds * rate, rate, (t) =>
    cut(ends[0], ends[1], 1.65 + high(t) * Math.sin(2 * Math.PI * hz * t) + 0.01 * noise()),
  );
}
const larger = (t: number): number => (t > 3 && t < 5.5 ? 2 : 1.2);

describe('clipping', () => {
  it.each([1.5, 20, 480])(
    'at the converter is found within 2 s and goes with it, %d teeth a second',
    (hz) => {
      const found = clips(codes(sine(hz, larger, [-1, 5])), converter);
      expect(found).toHaveLength(1);
      const { openedS, to, evidence, at } = found[0]!;
      expect(openedS).toBeGreaterThan(3);
      expect(openedS).toBeLessThanOrEqual(5);
      expect(to).toBeGreaterThan(4.9);
      expect(to).toBeLessThan(6.7);
      expect(evidence.cutBy).toBe('converter');
      expect(at).toBeGreaterThan(2.9);
    },
  );

  it.each([
    ['volts', {}],
    ['codes', converter],
  ])('at the rail of the sensor itself is found, %s', (kind, more) => {
    for (const hz of [1.5, 20, 480]) {
      const volts = sine(hz, larger, [0.165, 3.135]);
      const found = clips(kind === 'codes' ? codes(volts) : volts, more);
      expect(found, `${hz} teeth a second`).toHaveLength(1);
      expect(found[0]!.openedS).toBeLessThanOrEqual(5);
      expect(found[0]!.evidence.cutBy).toBe('sensor');
      const { railV } = found[0]!.evidence as { railV: number };
      expect(Math.min(Math.abs(railV - 0.165), Math.abs(railV - 3.135))).toBeLessThan(0.02);
    }
  });

  it('is found in a slow stream of 360 samples a second', () => {
    const found = clips(
      sine(6, () => 2, [0.1, 3.2], 4, 360),
      {},
      360,
    );
    expect(found).toHaveLength(1);
    expect(found[0]!.openedS).toBeLessThan(2);
  });

  it('a signal that only just comes that far, and a trapezoid of strong teeth within the range, are not clipped', () => {
    for (const high of [1.4, 1.45, 1.5, 1.55]) {
      expect(clips(sine(20, () => high, [0, 3.3], 5)), `${high} V, volts`).toEqual([]);
      expect(clips(codes(sine(20, () => high, [0, 3.3], 5)), converter), `${high} V, codes`).toEqual([]);
    }
    const trapezoid = sampled(
      5 * rateHz,
      rateHz,
      (t) => 1.65 + cut(-1.3, 1.3, 6 * Math.sin(40 * Math.PI * t)),
    );
    expect(clips(trapezoid)).toEqual([]);
    expect(clips(codes(trapezoid), converter)).toEqual([]);
  });

  it('a sensor that rests near an end by design, a switch, and a channel that lies at a rail are not clipped', () => {
    const { sensor } = testChannel('A', 'A');
    const pulses = sampled(
      5 * rateHz,
      rateHz,
      (t) => 0.2 + 2 * Math.max(0, Math.sin(2 * Math.PI * 20 * t)) ** 4,
    );
    expect(clips(pulses, { sensor: { ...sensor, quiescentV: 0.2 } })).toEqual([]);
    expect(clips(pulses, { sensor: { ...sensor, quiescentV: null } })).toEqual([]);
    const square = sampled(5 * rateHz, rateHz, (t) => ((20 * t) % 1 < 0.5 ? 3.25 : 0.05));
    expect(clips(square, { sensor: { ...sensor, kind: 'switch' } })).toEqual([]);
    expect(clips(square, { sensor })).toHaveLength(1);
    expect(
      clips(
        sampled(5 * rateHz, rateHz, (t) => (t < 2 ? 1.65 : 3.25)),
        { sensor },
      ),
    ).toEqual([]);
    expect(
      clips(
        sampled(6 * rateHz, rateHz, (t) => (t < 3 ? 3.25 : 1.65)),
        { sensor },
      ),
    ).toEqual([]);
  });
});
