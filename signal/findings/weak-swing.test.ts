import { describe, expect, it } from 'vitest';
import { watchFindings } from '@/signal/findings/test-watch';
import type { Watched } from '@/signal/findings/test-watch';
import type { RigSetup, Settings, Sensor } from '@/signal/model';
import { normal, sampled, seeded, testChannel, testRig, toothWheel } from '@/signal/test-signals';

const rateHz = 10_000;
const fixed = (operateV: number, releaseV: number): Partial<Settings> => ({
  band: { mode: 'fixed', operateV, releaseV },
});

type Case = { seconds?: number; noiseV?: number; rig?: RigSetup; settings?: Partial<Settings> };

/** 12 soft teeth, 1 V either way of 1.65 V, times `strength`. */
function weak(turnsAt: (t: number) => number, strength: (t: number) => number, more: Case = {}): Watched[] {
  const { seconds = 9, noiseV = 0.02, rig = testRig('single', 12), settings = {} } = more;
  const noise = normal(seeded(8));
  const wheel = toothWheel(12, 0, turnsAt);
  const volts = sampled(
    seconds * rateHz,
    rateHz,
    (t) => 1.65 + strength(t) * (wheel(t) - 1.65) + noiseV * noise(),
  );
  return only(watchFindings(rig, rateHz, settings, volts));
}

const only = (found: Watched[]): Watched[] => found.filter(({ code }) => code === 'weak-swing');
const during = (value: number) => (t: number) => (t > 3 && t < 6 ? value : 1);

function rigWith(sensor: Partial<Sensor>, maxInputV: number | null = 3.3): RigSetup {
  const channel = testChannel('A', 'A', { maxInputV });
  return testRig('single', 12, 0, { channels: [{ ...channel, sensor: { ...channel.sensor, ...sensor } }] });
}

describe('weak swing', () => {
  it.each([2, 8, 30])(
    'a swing that falls below half is found within 2 s and goes with it, %i turns a second',
    (speed) => {
      const found = weak((t) => speed * t, during(0.4));
      expect(found).toHaveLength(1);
      const { openedS, to, severity, evidence } = found[0]!;
      expect(openedS).toBeGreaterThan(3);
      expect(openedS).toBeLessThan(5);
      expect(to).toBeGreaterThan(5.4);
      expect(to).toBeLessThan(7.1);
      expect(severity).toBe('warn');
      expect(evidence.against).toBe('before');
      expect(evidence.leftPercent).toBeGreaterThan(36);
      expect(evidence.leftPercent).toBeLessThan(55);
    },
  );

  it('is known at a speed that was not seen before, unless the swing lives by speed', () => {
    const shaft = (t: number): number =>
      t < 4 ? 5 * t : t < 6 ? 20 + 5 * (t - 4) + 4 * (t - 4) ** 2 : 46 + 21 * (t - 6);
    const byFault = (t: number): number => (t < 4 ? 1 : t < 6 ? 1 - 0.34 * (t - 4) : 0.32);
    expect(weak(shaft, byFault)).toHaveLength(1);
    expect(weak(shaft, byFault, { rig: rigWith({ supplyV: null }) })).toEqual([]);
  });

  it('a filter that cuts at speed is not a sensor that gives less', () => {
    const shaft = (t: number): number =>
      t < 4 ? 3 * t : t < 6 ? 12 + 3 * (t - 4) + 5 * (t - 4) ** 2 : 38 + 23 * (t - 6);
    const filter = { kind: 'lowpass', family: 'butterworth', order: 2, cutoffHz: 100 } as const;
    expect(weak(shaft, () => 1, { settings: { filter } })).toEqual([]);
    // With a fixed band it costs teeth, and then the filter is named.
    const found = weak(shaft, () => 1, {
      settings: { filter, ...fixed(1.75, 1.55) },
      seconds: 10,
      noiseV: 0.04,
    });
    expect(found).toHaveLength(1);
    expect(found[0]!.evidence.filterPercent).toBeLessThan(30);
    expect(found[0]!.remedy).toContain('cutoff');
  });

  it('the worst tooth too near a fixed band is found, with where it is, though all are counted', () => {
    const wheel = toothWheel(12, 0, (t) => 5 * t);
    const volts = sampled(5 * rateHz, rateHz, (t) => {
      const isWeak = Math.floor(60 * t) % 12 === 5;
      return isWeak ? 0.65 + 0.66 * (wheel(t) - 0.65) : wheel(t);
    });
    const found = only(watchFindings(testRig('single', 12), rateHz, fixed(1.9, 1.4), volts));
    expect(found).toHaveLength(1);
    const { evidence, at } = found[0]!;
    expect(evidence.against).toBe('band');
    expect(evidence.marginV).toBeCloseTo(0.07, 2);
    expect(Math.floor(60 * at) % 12).toBe(5);
    expect(only(watchFindings(testRig('single', 12), rateHz, fixed(1.8, 1.4), volts))).toEqual([]);
    expect(only(watchFindings(testRig('single', 12), rateHz, {}, volts))).toEqual([]);
  });

  it('teeth that do not reach a fixed band are found while the others are counted', () => {
    const wheel = toothWheel(12, 0, (t) => 5 * t);
    // An eccentric wheel: a third of the turn falls short of 2 V.
    const volts = sampled(
      6 * rateHz,
      rateHz,
      (t) => 0.65 + (0.77 + 0.23 * Math.cos(2 * Math.PI * 5 * t)) * (wheel(t) - 0.65),
    );
    const found = only(watchFindings(testRig('single', 12), rateHz, fixed(2, 1.2), volts));
    expect(found).toHaveLength(1);
    expect(found[0]!.severity).toBe('fault');
    expect(found[0]!.evidence.against).toBe('missed');
    expect(found[0]!.openedS).toBeLessThan(2);
    expect(found[0]!.message).toContain('not counted');
  });

  it('a signal that never crosses its fixed band is found without any edge; at rest, after turning, it cannot be told', () => {
    const found = weak(
      (t) => 3 * t,
      () => 0.5,
      { settings: fixed(2.3, 1.4) },
    );
    expect(found).toHaveLength(1);
    expect(found[0]!.outcome).toBe('found');
    expect(found[0]!.openedS).toBeLessThan(3);
    expect(found[0]!.evidence.against).toBe('short');
    const rocking = (t: number): number => (t < 3 ? 3 * t : 9 + (0.17 + 0.1 * Math.sin(30 * t)) / 12);
    const rocked = weak(rocking, () => 1, { settings: fixed(1.9, 0.7) });
    expect(rocked.map(({ outcome }) => outcome)).toEqual(['cannot-tell']);
    expect(
      weak(
        (t) => Math.min(3 * t, 9.3),
        () => 1,
        { settings: fixed(1.9, 1.4) },
      ),
    ).toEqual([]);
  });

  it('hum at rest below a fixed band is not a swing', () => {
    const hum = sampled(6 * rateHz, rateHz, (t) => 1 + 0.4 * Math.sin(2 * Math.PI * 50 * t));
    expect(only(watchFindings(testRig('single', 12), rateHz, fixed(1.9, 1.3), hum))).toEqual([]);
  });

  it('noise that leaves a fitted band no room is found, noise of 20 dB is not', () => {
    expect(
      weak(
        (t) => 5 * t,
        () => 1,
        { noiseV: 0.0707 },
      ),
    ).toEqual([]);
    const found = weak(
      (t) => 5 * t,
      () => 1,
      { noiseV: 0.15 },
    );
    expect(found).toHaveLength(1);
    expect(found[0]!.evidence.against).toBe('noise');
    expect(found[0]!.evidence.noiseV).toBeCloseTo(0.15, 1);
  });

  it('bounce, ringing and a signal that stands for a moment are no weak teeth of a fixed band', () => {
    const noise = normal(seeded(9));
    const wheel = toothWheel(12, 0, (t) => 5 * t);
    const from2 = (t: number, then: number, before: number): number => (t > 2 ? then : before);
    // A band as wide as the noise.
    const noisy = sampled(8 * rateHz, rateHz, (t) => wheel(t) + from2(t, 0.03, 0.01) * noise());
    expect(only(watchFindings(testRig('single', 12), rateHz, fixed(1.665, 1.635), noisy))).toEqual([]);
    // A switch whose edges ring to and fro through the band.
    const ringing = sampled(6 * rateHz, rateHz, (t) => {
      const place = (60 * t) % 1;
      const since = (place % 0.5) / 60;
      const ring = from2(t, 2.8 * Math.exp(-since / 0.003) * Math.cos(2 * Math.PI * 900 * since), 0);
      return Math.max(0, Math.min(3.3, (place < 0.5 ? 3.3 - ring : ring) + 0.04 * noise()));
    });
    expect(only(watchFindings(rigWith({ kind: 'latch' }), rateHz, fixed(2, 1.3), ringing))).toEqual([]);
    // Here and there on the wheel, for about half a tooth.
    for (const [perS, teeth] of [
      [4.1, 0.8],
      [4.1, 0.6],
      [14.888, 0.5],
    ] as const) {
      const held = sampled(8 * rateHz, rateHz, (t) => {
        const beganS = Math.floor(t * perS) / perS;
        return wheel(from2(t, t - beganS < teeth / 60 ? beganS : t, t)) + 0.01 * noise();
      });
      expect(only(watchFindings(testRig('single', 12), rateHz, fixed(2, 1.3), held))).toEqual([]);
    }
  });

  it('a swing that was cut off for a while does not make the usual one weak', () => {
    const rig = testRig('single', 12);
    rig.channels[0] = { ...rig.channels[0]!, minCode: 0, maxCode: 3300 };
    const wheel = toothWheel(12, 0, (t) => 5 * t);
    const noise = normal(seeded(10));
    const volts = sampled(12 * rateHz, rateHz, (t) => {
      const v = 1.65 + (t > 4 && t < 8 ? 2 : 0.45) * (wheel(t) - 1.65) + 0.01 * noise();
      return Math.max(0, Math.min(3.3, v));
    });
    const codes = Int16Array.from(volts, (v) => Math.round(1000 * v));
    expect(only(watchFindings(rig, rateHz, {}, codes))).toEqual([]);
  });

  it('a switching line that is not pulled up is found by its level', () => {
    const line = (highV: number) =>
      sampled(4 * rateHz, rateHz, (t) => ((12 * 5 * t) % 1 < 0.5 ? highV : 0.1));
    const high = (highV: number, rig: RigSetup): string[] =>
      only(watchFindings(rig, rateHz, {}, line(highV))).map(({ evidence }) => String(evidence.against));
    expect(high(1.2, rigWith({ kind: 'switch' }))).toEqual(['pull-up']);
    expect(high(3.2, rigWith({ kind: 'switch' }))).toEqual([]);
    // 12 V for the sensor, 3.3 V for the line: as it should be.
    expect(high(3.3, rigWith({ kind: 'latch', supplyV: 12 }, 3.3))).toEqual([]);
    expect(high(3.3, rigWith({ kind: 'latch', supplyV: 12 }, null))).toEqual([]);
    expect(high(1.2, rigWith({ kind: 'linear' }))).toEqual([]);
  });

  it('nothing is said of a start, a ramp, a stop and a reversal, nor of teeth whose swing differs by four to one', () => {
    const shaft = (t: number): number =>
      t < 1 ? 0 : t < 4 ? (t - 1) ** 2 : t < 7 ? 9 + 6 * (t - 4) - (t - 4) ** 2 : 18 - 0.5 * (t - 7) ** 2;
    expect(weak(shaft, () => 1, { seconds: 11 })).toEqual([]);
    expect(weak(shaft, () => 1, { seconds: 11, settings: fixed(1.9, 1.4) })).toEqual([]);
    const uneven = sampled(6 * rateHz, rateHz, (t) => {
      const place = 60 * t;
      const height = 0.25 + (0.75 * ((Math.floor(place) * 7) % 12)) / 11;
      return 0.65 + height * (1 - Math.cos(2 * Math.PI * place));
    });
    expect(only(watchFindings(testRig('single', 12), rateHz, fixed(0.95, 0.8), uneven))).toEqual([]);
  });
});
