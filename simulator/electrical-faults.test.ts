import { describe, expect, it } from 'vitest';
import { linear, poles, risesOf, swingOf, toothed, voltsOf, withFaults } from '@/simulator/test-rigs';

const first = (spec: Parameters<typeof voltsOf>[0], seconds = 2) => voltsOf(spec, seconds)[0] as number[];
const share = (volts: readonly number[]) => volts.filter((v) => v > 2.5).length / volts.length;

describe('what sensor, cable and input do', () => {
  it('a weak pull-up slows the rise to 2.2 R C and leaves the fall', () => {
    const volts = first(withFaults(poles, { kind: 'weak-pull-up', ohm: 2e6 }));
    const at = (level: number, from: number) => volts.findIndex((v, i) => i >= from && v >= level);
    const begin = volts.findIndex((v, i) => i > 1000 && v < 0.01);
    const rise = (at(4.5, begin) - at(0.5, begin)) / 10_000;
    expect(Math.abs(rise / (Math.log(9) * 2e6 * 1e-9) - 1)).toBeLessThan(0.06);
    const fall = volts.findIndex((v, i) => i > at(4.9, begin) && v < 4.5);
    expect(volts[fall + 1]).toBeLessThan(0.5);
  });

  it('a loaded line stays below its supply', () => {
    const volts = first(withFaults(poles, { kind: 'weak-pull-up', ohm: 1000, highV: 2 }));
    expect(Math.max(...volts)).toBeCloseTo(2, 3);
  });

  it('drifting points shift the duty by asin(c / A) / pi', () => {
    const healthy = share(first(poles));
    const peakMt = swingOf(first({ ...poles, channels: [linear('A')] })) / 2 / 0.025;
    const drifted = share(first(withFaults(poles, { kind: 'points-drift', addMt: peakMt / 2 })));
    expect(healthy).toBeCloseTo(0.5, 2);
    // Open drain: the line is high where the field is low, so that it is high for longer.
    expect(Math.abs(drifted - (0.5 + Math.asin(0.5) / Math.PI))).toBeLessThan(0.03);
  });

  it('an inverted line shows high for low', () => {
    for (const spec of [poles, toothed]) {
      const plain = first(spec);
      const turned = first(withFaults(spec, { kind: 'inverted-line' }));
      for (let i = 0; i < 500; i += 1) expect((plain[i] as number) + (turned[i] as number)).toBeCloseTo(5, 5);
    }
  });

  it("swapped channels are on each other's input", () => {
    const pair = { ...toothed, channels: [linear('A'), linear('B', { placeDeg: 90 })] };
    const [a, b] = voltsOf(pair, 0.1);
    expect(voltsOf(withFaults(pair, { kind: 'swapped-channels', channels: ['A', 'B'] }), 0.1)).toEqual([
      b,
      a,
    ]);
  });

  it('ringing passes the middle again after each edge', () => {
    const ringing = { kind: 'ringing', hz: 1200, decayS: 0.002, share: 0.9 } as const;
    const healthy = risesOf(first(poles));
    expect(risesOf(first(withFaults(poles, ringing))).length).toBeGreaterThan(1.5 * healthy.length);
  });

  it('spikes come as often as asked and last as long', () => {
    const still = { ...poles, motion: { startRpm: 0, segments: [{ durationS: 10, toRpm: 0 }] } };
    const volts = first(withFaults(still, { kind: 'spikes', perS: 20, heightV: -4, widthS: 0.0005 }), 5);
    const low = volts.map((v) => 5 - v);
    expect(risesOf(low, 3, 2)).toHaveLength(100);
    expect(low.filter((v) => v > 3).length / 100).toBeCloseTo(5, 0);
  });

  it('a frozen input holds all channels at once, so that states are skipped', () => {
    const pair = { ...toothed, channels: [linear('A'), linear('B', { placeDeg: 90 })] };
    const [a, b] = voltsOf(withFaults(pair, { kind: 'freeze', perS: 5, forS: 0.01 }), 2) as [
      number[],
      number[],
    ];
    const held = (volts: number[]) => volts.flatMap((v, i) => (i > 0 && v === volts[i - 1] ? [i] : []));
    expect(held(a)).toEqual(held(b));
    expect(held(a).length).toBeGreaterThan(900);
    expect(held(a).length).toBeLessThan(1020);
  });

  it('hum has the third harmonic that was asked for', () => {
    const still = { ...toothed, motion: { startRpm: 0, segments: [{ durationS: 10, toRpm: 0 }] } };
    const volts = first(withFaults(still, { kind: 'hum', amplitudeV: 0.2, hz: 50, thirdShare: 0.5 }), 1);
    const line = (hz: number) => {
      let re = 0;
      let im = 0;
      volts.forEach((v, i) => {
        re += v * Math.cos((2 * Math.PI * hz * i) / 10_000);
        im += v * Math.sin((2 * Math.PI * hz * i) / 10_000);
      });
      return (2 * Math.hypot(re, im)) / volts.length;
    };
    expect(line(50)).toBeCloseTo(0.2, 5);
    expect(line(150)).toBeCloseTo(0.1, 5);
    expect(line(100)).toBeLessThan(1e-5);
  });

  it("a field beside the wheel's own lifts the baseline", () => {
    const lifted = first({ ...toothed, channels: [linear('A', { baselineMt: 20 })] });
    const plain = first(toothed);
    lifted.forEach((v, i) => expect(v - (plain[i] as number)).toBeCloseTo(0.5, 5));
  });

  it('temperature moves the points of a switching sensor by what it is worth in field', () => {
    const drifting = { percentPerK: 0, swingK: 10, periodS: 8, offsetMtPerK: 0.5 };
    const [volts] = voltsOf({ ...toothed, temperature: drifting }, 4) as [number[]];
    const middle = (fromS: number) => {
      const part = volts.slice(fromS * 10_000, (fromS + 0.2) * 10_000);
      return (Math.max(...part) + Math.min(...part)) / 2;
    };
    // 10 K at the quarter period: 5 mT, 0.125 V.
    expect(middle(1.9) - middle(0)).toBeCloseTo(0.125, 1);
  });
});
