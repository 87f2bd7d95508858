import { describe, expect, it } from 'vitest';
import { createRig } from '@/simulator/rig-model';
import { linear, poles, risesOf, swingOf, toothed, voltsOf, withFaults } from '@/simulator/test-rigs';

const first = (spec: Parameters<typeof voltsOf>[0], seconds = 2) => voltsOf(spec, seconds)[0] as number[];

describe('what wheel and bearing do', () => {
  it('a burr makes one more pulse a turn, between the same two teeth', () => {
    const healthy = risesOf(first(toothed));
    const spoilt = risesOf(first(withFaults(toothed, { kind: 'burr', at: 5, strength: 1, width: 0.25 })));
    const extra = spoilt.filter((at) => !healthy.some((other) => Math.abs(other - at) < 15));
    // 300 rpm: five turns a second, 2000 samples each; the field of the burr rises before its middle at position 5.
    expect(extra).toHaveLength(10);
    for (const at of extra) expect(Math.abs((at % 2000) - (2000 * 5) / 12)).toBeLessThan(0.2 * (2000 / 12));
  });

  it('burrs stand on magnet rings and pole rings too', () => {
    const onPoles = { ...poles, channels: [linear('A')] };
    const burr = { kind: 'burr', at: 1, strength: 1, width: 0.3 } as const;
    const healthy = risesOf(first(onPoles), 2.6, 2.4);
    expect(healthy).toHaveLength(40);
    expect(risesOf(first(withFaults(onPoles, burr)), 2.6, 2.4)).toHaveLength(50);
  });

  it('chips sit elsewhere each turn, and in the asked share of turns', () => {
    const chips = { kind: 'chips', share: 0.5, strength: 1, width: 0.4 } as const;
    const healthy = first(toothed, 20);
    const spoilt = first(withFaults(toothed, chips), 20);
    const turns = new Map<number, number>();
    healthy.forEach((v, i) => {
      const more = (spoilt[i] as number) - v;
      if (more > 1.4) turns.set(Math.floor(i / 2000), i % 2000);
    });
    expect(turns.size).toBeGreaterThan(35);
    expect(turns.size).toBeLessThan(65);
    expect(swingOf([...turns.values()])).toBeGreaterThan(1000);
  });

  it('a bent tooth comes late by its share of the pitch', () => {
    const bent = withFaults(toothed, { kind: 'uneven-pitch', shifts: { 4: 0.2 } });
    const late = risesOf(first(bent)).map((at, i) => at - (risesOf(first(toothed))[i] as number));
    const pitch = 2000 / 12;
    late.forEach((samples, i) =>
      expect(Math.abs(samples - (i % 12 === 4 ? 0.2 * pitch : 0))).toBeLessThan(1.1),
    );
  });

  it('a wheel off its axis swings more on one side, and is seen early and late by e / r', () => {
    const off = withFaults(toothed, { kind: 'run-out', addMm: 0.4 });
    const volts = first(off);
    const swings = Array.from({ length: 12 }, (_, k) =>
      swingOf(volts.slice(Math.round((k * 2000) / 12), Math.round(((k + 1) * 2000) / 12))),
    );
    // exp(2 pi 0.4 / 8) each way.
    expect(Math.max(...swings) / Math.min(...swings)).toBeGreaterThan(1.6);
    expect(Math.max(...swings) / Math.min(...swings)).toBeLessThan(1.9);
    const moved = risesOf(volts, 2.52, 2.48).map(
      (at, i) => at - (risesOf(first(toothed), 2.52, 2.48)[i] as number),
    );
    // 0.4 mm of a pitch of 8 mm: 5 % of a tooth either way.
    expect(Math.max(...moved) / (2000 / 12)).toBeGreaterThan(0.035);
    expect(Math.min(...moved) / (2000 / 12)).toBeLessThan(-0.035);
  });

  it('the truth knows the run-out that the wheel was built with', () => {
    const built = { ...toothed, rateHz: 50_000, wheel: { ...toothed.wheel, runOutMm: 0.4 } };
    const rig = createRig(built, 1);
    const volts = Array.from(rig.block(0, 50_000)[0] as Float32Array);
    const known = rig.truth.toothTimes(0, 0.999).filter(({ rising }) => rising);
    const seen = risesOf(volts, 2.5, 2.499);
    expect(seen).toHaveLength(known.length);
    known.forEach(({ tS }, i) => expect(Math.abs((seen[i] as number) - tS * 50_000)).toBeLessThan(1.01));
  });

  it('a weak magnet halves the swing', () => {
    const plain = { ...poles, channels: [linear('A')] };
    const weak = first(withFaults(plain, { kind: 'weak-magnet', factor: 0.5 }));
    expect(swingOf(weak) / swingOf(first(plain))).toBeCloseTo(0.5, 3);
  });

  it('a shaking wheel that stands on a flank makes pulses without a turn', () => {
    // Tooth 0 rises through its middle at a quarter of a pitch.
    const standing = {
      ...toothed,
      motion: { startRpm: 0, segments: [{ durationS: 10, toRpm: 0 }] },
      channels: [linear('A', { placeDeg: -90 })],
    };
    const shaken = withFaults(standing, { kind: 'shake', amplitudeDeg: 60, hz: 12 });
    expect(risesOf(first(standing))).toHaveLength(0);
    expect(risesOf(first(shaken)).length).toBeGreaterThan(15);
  });

  it("a coil's swing grows with the speed until it clips", () => {
    const ramp = {
      ...toothed,
      motion: {
        startRpm: 0,
        segments: [
          { durationS: 10, toRpm: 1200 },
          { durationS: 1, toRpm: 0 },
        ],
      },
      channels: [linear('A', { swingRpm: 300 })],
    };
    const volts = first(ramp, 10);
    const during = (fromS: number) => swingOf(volts.slice(fromS * 10_000, (fromS + 1) * 10_000));
    expect(during(2) / during(1)).toBeCloseTo(1.5, 1);
    expect(during(9)).toBe(5);
  });
});
