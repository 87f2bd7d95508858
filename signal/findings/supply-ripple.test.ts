import { describe, expect, it } from 'vitest';
import { codesOf, watchFindings } from '@/signal/findings/test-watch';
import type { Watched } from '@/signal/findings/test-watch';
import type { RigSetup } from '@/signal/model';
import { normal, sampled, seeded, testRig } from '@/signal/test-signals';
import { createRig } from '@/simulator/rig-model';
import type { RigSpec } from '@/simulator/rig-model';
import { linear, withFaults } from '@/simulator/test-rigs';

const rateHz = 10_000;

type Case = { seconds?: number; noiseV?: number; rig?: RigSetup; phase?: number; bodies?: number };

/** Two sensors a quarter of a tooth apart, 1 V either way, whose supply (and with it all of their output) ripples. */
function ripples(turnsAt: (t: number) => number, supply: (t: number) => number, more: Case = {}): Watched[] {
  const { seconds = 8, noiseV = 0.02, rig = testRig('quadrature', 24), phase = 0.25, bodies = 1 } = more;
  const noise = normal(seeded(7));
  const channel = (place: number) =>
    sampled(
      seconds * rateHz,
      rateHz,
      (t) =>
        (1.65 + bodies * Math.sin(2 * Math.PI * (24 * turnsAt(t) - place))) * (1 + supply(t)) +
        noiseV * noise(),
    );
  return watchFindings(rig, rateHz, {}, channel(0), channel(phase));
}

const only = (found: Watched[]): Watched[] => found.filter(({ code }) => code === 'supply-ripple');
const sine =
  (hz: number, share: number, from = 0, to = Infinity) =>
  (t: number) =>
    t >= from && t < to ? share * Math.sin(2 * Math.PI * hz * t) : 0;

describe('supply ripple', () => {
  it.each([
    [100, 0.4],
    [100, 3.3],
    [120, 21.7],
    [300, 1.1],
    [105, 3.3],
    [31, 8.7],
  ])('of %i Hz is found within 2 s at %d turns a second, and goes with it', (hz, speed) => {
    const found = ripples((t) => speed * t, sine(hz, 0.06, 3.3, 6), { seconds: 10 });
    expect(codesOf(found)).toEqual(['supply-ripple']);
    const { openedS, to, evidence, channel } = found[0]!;
    expect(channel).toBeNull();
    expect(openedS).toBeGreaterThan(3.3);
    expect(openedS).toBeLessThanOrEqual(5.4);
    expect(to).toBeGreaterThan(5.5);
    expect(to).toBeLessThan(8.1);
    expect(evidence.rippleHz).toBeCloseTo(hz, 0);
    expect(evidence.amplitudeV).toBeGreaterThan(0.08);
    expect(evidence.amplitudeV).toBeLessThan(0.12);
    expect(evidence.correlation).toBeGreaterThan(0.9);
    expect(evidence.channels).toBe('A, B');
  });

  it('is found where it is slow beside quick teeth, nearly in step with the turns, and beside teeth near the mains', () => {
    for (const [hz, share, turnsAt] of [
      [1.6, 0.08, (t: number) => 18 * t],
      // The speed falls by a quarter meanwhile.
      [4.2, 0.12, (t: number) => 9 * t - 0.19 * Math.max(0, t - 2) ** 2],
      // 51 teeth a second, and so near the mains that their own side bands lie on them.
      [1.7, 0.12, (t: number) => 2.125 * t],
      [4, 0.12, (t: number) => 1.92 * t],
    ] as const) {
      const found = only(ripples(turnsAt, sine(hz, share, 3.3)));
      expect(found, `${hz} Hz`).toHaveLength(1);
      expect(found[0]!.openedS, `${hz} Hz`).toBeLessThan(3.3 + Math.max(2.1, 4 / hz));
    }
  });

  it('is found at rest', () => {
    const shaft = (t: number): number => Math.min(5 * t, 10.3);
    const found = only(ripples(shaft, sine(100, 0.05, 4)));
    expect(found).toHaveLength(1);
    expect(found[0]!.openedS).toBeLessThan(6.1);
  });

  it('nothing is said of clean pairs at any speed, of a pair that stands too close, of noise and of small ripple', () => {
    for (const speed of [0.05, 0.2, 0.7, 1.3, 2.08, 4.17, 8.3, 20.8, 41.7, 62.5]) {
      expect(
        only(
          ripples(
            (t) => speed * t,
            () => 0,
            { seconds: 5 },
          ),
        ),
        `${speed} turns a second`,
      ).toEqual([]);
      expect(
        only(
          ripples(
            (t) => speed * t,
            () => 0,
            { seconds: 5, phase: 0.03 },
          ),
        ),
        `near ${speed}`,
      ).toEqual([]);
    }
    expect(
      only(
        ripples(
          (t) => 3.3 * t,
          () => 0,
          { noiseV: 0.12 },
        ),
      ),
    ).toEqual([]);
    expect(only(ripples((t) => 3.3 * t, sine(100, 0.015)))).toEqual([]);
  });

  it('a start, a stop, a reversal and run-out are none', () => {
    const toAndFro = (t: number): number => 2 * Math.sin(1.5 * t);
    expect(only(ripples(toAndFro, () => 0, { seconds: 12 }))).toEqual([]);
    const stop = (t: number): number => (t < 3 ? 3 * t : t < 5 ? 9 + 3 * (t - 3) - 0.75 * (t - 3) ** 2 : 12);
    expect(only(ripples(stop, () => 0, { seconds: 10 }))).toEqual([]);
    // Once a turn, on both at nearly the same time.
    const runOut = (turnsAt: number) => (t: number) => 0.08 * Math.sin(2 * Math.PI * turnsAt * t);
    for (const speed of [2, 9, 25, 50])
      expect(only(ripples((t) => speed * t, runOut(speed))), `${speed} turns a second`).toEqual([]);
  });

  it('hum on one channel, or on both with its third harmonic, is hum', () => {
    const rig = testRig('quadrature', 24);
    const volts = (place: number, hum: boolean) =>
      sampled(5 * rateHz, rateHz, (t) => {
        const angle = 2 * Math.PI * 50 * t;
        const added = hum ? 0.3 * Math.sin(angle) + 0.1 * Math.sin(3 * angle) : 0;
        return 1.65 + Math.sin(2 * Math.PI * (24 * 3.3 * t - place)) + added;
      });
    expect(codesOf(watchFindings(rig, rateHz, {}, volts(0, true), volts(0.25, false)))).toEqual([
      'mains-hum',
    ]);
    const both = watchFindings(rig, rateHz, {}, volts(0, true), volts(0.25, true));
    expect(codesOf(both)).toEqual(['mains-hum', 'mains-hum']);
  });

  it('is seen on two simulated sensors of one supply, and not on switching ones', () => {
    const ring: RigSpec = {
      rateHz,
      motion: { startRpm: 300, segments: [{ durationS: 10, toRpm: 300 }] },
      wheel: { kind: 'pole-ring', positions: 24, pairLengthMm: 6, thicknessMm: 2, remanenceT: 0.24 },
      gapMm: 1.1,
      supply: { nominalV: 5 },
      channels: [ratiometric('A', 0), ratiometric('B', 90)],
      adc: { kind: 'volts' },
      faults: [],
    };
    const rig = testRig('quadrature', 24);
    for (const { sensor } of rig.channels) sensor.supplyV = 5;
    const run = (spec: RigSpec, setup = rig): string[] => {
      const arrays = createRig(spec, 3).block(0, 5 * rateHz);
      return codesOf(watchFindings(setup, rateHz, {}, ...arrays.map((array) => Float64Array.from(array))));
    };
    expect(run(ring)).toEqual([]);
    const rippled = withFaults(ring, { kind: 'supply-ripple', amplitudeV: 0.2, hz: 100 });
    expect(run(rippled)).toEqual(['supply-ripple']);
  });
});

function ratiometric(name: string, placeDeg: number) {
  const plain = linear(name, { placeDeg });
  return { ...plain, sensor: { ...plain.sensor, ratiometric: true } } as typeof plain;
}
