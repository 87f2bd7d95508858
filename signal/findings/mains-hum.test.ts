import { describe, expect, it } from 'vitest';
import { watchFindings } from '@/signal/findings/test-watch';
import type { Watched } from '@/signal/findings/test-watch';
import type { RigSetup, Settings } from '@/signal/model';
import { normal, sampled, seeded, testRig, toothWheel } from '@/signal/test-signals';

type Case = {
  seconds?: number;
  rateHz?: number;
  rig?: RigSetup;
  settings?: Partial<Settings>;
  noiseV?: number;
  wheel?: (t: number) => number;
};

/** 24 soft teeth of 2 V, and what comes on top. */
function hums(turnsAt: (t: number) => number, added: (t: number) => number, more: Case = {}): Watched[] {
  const { seconds = 8, rateHz = 10_000, rig = testRig('single', 24), settings = {}, noiseV = 0.02 } = more;
  const noise = normal(seeded(2));
  const wheel = more.wheel ?? toothWheel(24, 0, turnsAt);
  const volts = sampled(seconds * rateHz, rateHz, (t) => wheel(t) + added(t) + noiseV * noise());
  return watchFindings(rig, rateHz, settings, volts).filter(({ code }) => code === 'mains-hum');
}

const tone =
  (hz: number, volts: number, from = 0, to = Infinity) =>
  (t: number) =>
    t >= from && t < to ? volts * Math.sin(2 * Math.PI * hz * t) : 0;

describe('mains hum', () => {
  it.each([
    [0.3, 10_000],
    [3.3, 10_000],
    [43.3, 20_000],
    [80.7, 20_000],
  ])('is found within 2 s and goes with it, %d turns a second at %i Hz', (speed, rateHz) => {
    const found = hums((t) => speed * t, tone(50, 0.12, 3.3, 6), { seconds: 10, rateHz });
    expect(found).toHaveLength(1);
    const { openedS, from, to, outcome, severity, evidence } = found[0]!;
    expect(openedS).toBeGreaterThan(3.3);
    expect(openedS).toBeLessThanOrEqual(5.3);
    expect(from).toBeGreaterThan(2.7);
    expect(to).toBeGreaterThan(5.5);
    expect(to).toBeLessThan(7.1);
    expect(outcome).toBe('found');
    expect(severity).toBe('warn');
    expect(evidence.humHz).toBeCloseTo(50, 0);
    expect(evidence.amplitudeV).toBeGreaterThan(0.1);
    expect(evidence.amplitudeV).toBeLessThan(0.14);
  });

  it.each([60, 49.8, 120, 150])('is found at %d Hz too', (hz) => {
    const found = hums((t) => 7.7 * t, tone(hz, 0.12));
    expect(found).toHaveLength(1);
    expect(found[0]!.evidence.humHz).toBeCloseTo(hz, 1);
  });

  it('less than a twentieth of half the swing, another tone and noise of 25 dB are none', () => {
    expect(hums((t) => 7.7 * t, tone(50, 0.04))).toEqual([]);
    expect(hums((t) => 7.7 * t, tone(53, 0.2))).toEqual([]);
    expect(hums((t) => 7.7 * t, tone(0, 0), { noiseV: 0.04 })).toEqual([]);
  });

  it('is known at rest, by the swing from before', () => {
    const shaft = (t: number): number => Math.min(5 * t, 15.3);
    const found = hums(shaft, tone(50, 0.1, 4.2, 6.5), { seconds: 9 });
    expect(found).toHaveLength(1);
    expect(found[0]!.openedS).toBeLessThan(6.3);
    expect(found[0]!.outcome).toBe('found');
    expect(found[0]!.evidence.ofHalfSwingPercent).toBeCloseTo(10, 0);
  });

  it('is known at rest before any tooth, by what the sensor can give', () => {
    const found = hums(() => 0.3, tone(60, 0.05));
    expect(found).toHaveLength(1);
    expect(found[0]!.outcome).toBe('found');
    expect(hums(() => 0.3, tone(60, 0.01))).toEqual([]);
  });

  it.each([45.3, 46.8, 53.4, 55.3])('is found beside the teeth, %d of them a second', (toothHz) => {
    const found = hums((t) => (toothHz / 24) * t, tone(50, 0.12, 3.3, 8), { seconds: 12 });
    expect(found).toHaveLength(1);
    expect(found[0]!.openedS).toBeLessThanOrEqual(5.8);
    expect(found[0]!.outcome).toBe('found');
    expect(found[0]!.to).toBeLessThan(9.6);
  });

  it('side bands of the teeth, by a speed that ripples within the turn, are none', () => {
    const rig = testRig('single', 68);
    for (const toothHz of [48.4, 57.8, 62.1]) {
      const turnHz = toothHz / 68;
      const ripple = (t: number): number => (0.01 / (6 * Math.PI)) * Math.sin(6 * Math.PI * turnHz * t);
      const wheel = toothWheel(68, 0, (t) => turnHz * t + ripple(t));
      const quiet = () => 0;
      expect(hums(quiet, quiet, { rig, wheel }), `${toothHz} teeth a second`).toEqual([]);
    }
  });

  it('harmonics of teeth that are cut off at the ends of the range are none', () => {
    const quiet = () => 0;
    const swing = (t: number): number => (t < 4 ? 1 : 3.5);
    const wheel = (turnHz: number) => (t: number) =>
      Math.min(4.75, Math.max(0.25, 2.5 + swing(t) * Math.sin(2 * Math.PI * 24 * turnHz * t)));
    for (const toothHz of [16.66, 20, 33.2])
      expect(hums(quiet, quiet, { wheel: wheel(toothHz / 24) }), `${toothHz} teeth a second`).toEqual([]);
  });

  it('teeth of which every second one is another may make the tone', () => {
    const rig = testRig('single', 24);
    const turns = (t: number): number => 5 * t;
    const wheel = (t: number): number =>
      2.5 + Math.sin(2 * Math.PI * 24 * turns(t)) + 0.25 * Math.sin(2 * Math.PI * 12 * turns(t));
    const found = hums(turns, () => 0, { rig, wheel });
    expect(found.map(({ outcome }) => outcome)).toEqual(['cannot-tell']);
  });

  it('a little of it is not held against what shakes at the band of a shaft that stands', () => {
    const settings: Partial<Settings> = { band: { mode: 'fixed', operateV: 2.52, releaseV: 2.48 } };
    const noise = normal(seeded(9));
    const wheel = (t: number): number =>
      2.5 + (t < 5 ? Math.sin(2 * Math.PI * 40 * t) : 0) + (t > 6 && t < 11 ? 0.025 * noise() : 0);
    const found = hums(() => 0, tone(50, 0.02, 0), { seconds: 12, settings, wheel, noiseV: 0.005 });
    expect(found).toEqual([]);
  });

  it('cannot be told from run-out where the wheel turns 50 times a second, until the speed has changed', () => {
    const shaft = (t: number): number =>
      t < 5 ? 50 * t : 250 + 50 * (t - 5) - 2.5 * Math.min(2, t - 5) ** 2 - 10 * Math.max(0, t - 7);
    const found = hums(shaft, tone(50, 0.15), { seconds: 10, rateHz: 20_000 });
    expect(found).toHaveLength(1);
    expect(found[0]!.openedS).toBeLessThan(3);
    expect(found[0]!.outcome).toBe('found');
    const steady = hums((t) => 50 * t, tone(50, 0.15), { rateHz: 20_000 });
    expect(steady).toHaveLength(1);
    expect(steady[0]!.outcome).toBe('cannot-tell');
    expect(steady[0]!.evidence.order).toBe(1);
    expect(steady[0]!.remedy).toContain('a tenth');
  });

  it('a speed that ripples, whose side band folds to 50 Hz, is no hum', () => {
    // 24 teeth: 900.3 Hz of them and four orders come to 1050.3 Hz, which a ring of 1000 samples a second holds at 50.3 Hz.
    const turnHz = 1050.3 / 28;
    const shaft = (t: number): number => turnHz * t + 0.0008 * Math.sin(2 * Math.PI * 4 * turnHz * t);
    expect(hums(shaft, () => 0, { seconds: 8, rateHz: 20_000 })).toEqual([]);
    expect(hums(shaft, tone(50.1, 0.15), { seconds: 8, rateHz: 20_000 })).toHaveLength(1);
  });

  it('an order that moves along with the speed ends there', () => {
    const shaft = (t: number): number =>
      t < 5 ? 50 * t : 250 + 50 * (t - 5) - 2.5 * Math.min(2, t - 5) ** 2 - 10 * Math.max(0, t - 7);
    const added = (t: number): number => 0.15 * Math.sin(2 * Math.PI * shaft(t));
    const found = hums(shaft, added, { seconds: 11, rateHz: 20_000 });
    expect(found).toHaveLength(1);
    expect(found[0]!.outcome).toBe('cannot-tell');
    expect(found[0]!.to).toBeLessThan(8);
  });

  it('nothing is said of a clean wheel whose teeth, orders or images come at 50 or 60 Hz', () => {
    const quiet = () => 0;
    for (const toothHz of [50, 60, 100, 25, 12.5, 5, 2, 950, 1050, 1940, 333.3]) {
      const speed = toothHz / 24;
      expect(
        hums((t) => speed * t, quiet, { seconds: 5 }),
        `${toothHz} teeth a second`,
      ).toEqual([]);
    }
    for (const speed of [50, 60, 25, 16.67, 10]) {
      expect(
        hums((t) => speed * t, quiet, { seconds: 5 }),
        `${speed} turns a second`,
      ).toEqual([]);
      const gapped = toothWheel(60, 2, (t) => speed * t);
      const rig = testRig('single', 60, 2);
      expect(
        hums(quiet, quiet, { seconds: 5, rig, wheel: gapped, rateHz: 20_000 }),
        `60-2 at ${speed}`,
      ).toEqual([]);
    }
  });

  it('nothing is said of square pulses at any speed, nor of starts, ramps and stops', () => {
    const square = (turnsAt: (t: number) => number) => (t: number) =>
      (((8 * turnsAt(t)) % 1) + 1) % 1 < 0.4 ? 3 : 0.3;
    const rig = testRig('single', 8);
    for (const toothHz of [0.7, 1.6, 2, 2.5, 3.1, 4.2, 5, 7.1, 10, 12.5, 16.7, 25, 49.5, 50.4, 60, 70]) {
      const wheel = square((t) => (toothHz / 8) * t);
      expect(
        hums(
          () => 0,
          () => 0,
          { seconds: 6, rig, wheel },
        ),
        `${toothHz} pulses a second`,
      ).toEqual([]);
    }
    const ramp = (t: number): number =>
      t < 1 ? 0 : t < 5 ? (t - 1) ** 2 : t < 9 ? 16 + 8 * (t - 5) - (t - 5) ** 2 : 32;
    expect(
      hums(
        () => 0,
        () => 0,
        { seconds: 11, rig, wheel: square(ramp) },
      ),
    ).toEqual([]);
    expect(hums(ramp, () => 0, { seconds: 11 })).toEqual([]);
  });
});
