import { describe, expect, it } from 'vitest';
import { watchFindings } from '@/signal/findings/test-watch';
import { wheelVolts } from '@/signal/findings/test-wheel';
import type { RigSetup } from '@/signal/model';
import { normal, sampled, seeded, testRig } from '@/signal/test-signals';

const rateHz = 10_000;

function uneven(rig: RigSetup, seconds: number, ...volts: ((t: number) => number)[]) {
  const arrays = volts.map((at) => sampled(seconds * rateHz, rateHz, at));
  return watchFindings(rig, rateHz, {}, ...arrays).filter(({ code }) => code === 'uneven-teeth');
}

describe('uneven teeth', () => {
  it('are found where one is bent, with its place and how far it is off, and let go when it is straight again', () => {
    const volts = wheelVolts({ positions: 24, placeOf: (k, t) => (k === 7 && t > 2 && t < 6 ? 0.09 : 0) });
    const [finding, ...more] = uneven(testRig('single', 24), 12, volts);
    expect(more).toEqual([]);
    expect(finding).toMatchObject({ channel: 'A', outcome: 'found', severity: 'warn' });
    expect(finding!.evidence).toMatchObject({
      position: 7,
      positions: 24,
      teeth: 1,
      pattern: 'single teeth',
    });
    expect(finding!.evidence.offPercent).toBeGreaterThan(5);
    expect(finding!.evidence.offPercent).toBeLessThan(9.5);
    expect(finding!.openedS).toBeGreaterThan(2.3);
    expect(finding!.openedS).toBeLessThan(4);
    expect((finding!.at * 10) % 1).toBeCloseTo(7.34 / 24, 2);
    expect(finding!.to!).toBeLessThan(8.5);
  });

  it('are found on a wheel with a gap, by their numbers', () => {
    const placeOf = (k: number) => (k === 20 ? -0.1 : k === 41 ? 0.12 : 0);
    const [finding] = uneven(testRig('single', 60, 2), 4, wheelVolts({ positions: 60, missing: 2, placeOf }));
    expect(finding!.evidence).toMatchObject({ position: 41, numbering: 'from the gap', teeth: 2 });
    expect(finding!.evidence.offPercent).toBeCloseTo(12, 0);
    expect(finding!.evidence.offDeg).toBeCloseTo(0.72, 1);
  });

  it.each([24, 25])('are found where every second one of %d is off', (positions) => {
    const placeOf = (k: number) => (k % 2 === 0 ? 0.08 : 0);
    const [finding] = uneven(testRig('single', positions), 4, wheelVolts({ positions, placeOf }));
    expect(finding).toMatchObject({ outcome: 'found', evidence: { pattern: 'every second tooth' } });
    expect(finding!.message).toContain('Every second');
  });

  it.each([
    [24, 0, 'single teeth', (k: number) => (k === 7 ? 0.13 : 0)],
    [36, 1, 'single teeth', (k: number) => (k === 7 ? -0.13 : 0)],
    [24, 0, 'every second tooth', (k: number) => (k % 2 === 0 ? 0.08 : -0.08)],
  ] as const)(
    'are found by falling edges alone, %d teeth with %d missing, %s',
    (positions, missing, pattern, longer) => {
      const volts = (t: number) => {
        const place = (10 * t * positions) % positions;
        const k = Math.floor(place);
        const isTooth = k < positions - missing && place - k < 0.5 + (t > 2 && t < 5 ? longer(k) : 0);
        return isTooth ? 3 : 0.3;
      };
      const [finding, ...more] = uneven(testRig('single', positions, missing), 10, volts);
      expect(more).toEqual([]);
      expect(finding).toMatchObject({ outcome: 'found', evidence: { pattern, flank: 'falling' } });
      if (pattern === 'single teeth') {
        expect(Math.abs(Number(finding!.evidence.offPercent))).toBeGreaterThan(9);
        expect(Math.abs(Number(finding!.evidence.offPercent))).toBeLessThan(14);
      }
      if (missing > 0) expect(finding!.evidence.position).toBe(7);
      expect(finding!.openedS).toBeGreaterThan(2.2);
      expect(finding!.openedS).toBeLessThan(4.5);
      expect(finding!.to!).toBeLessThan(8);
      expect(finding!.message).toContain('falling edge');
    },
  );

  it.each([
    [0.5, -50],
    [1.6, 60],
  ])('are found by a swing of their own, %d times the others', (strength, percent) => {
    const volts = wheelVolts({ positions: 24, strengthOf: (k) => (k === 5 ? strength : 1) });
    const band = { mode: 'fixed', operateV: 1.25, releaseV: 0.85 } as const;
    const found = watchFindings(testRig('single', 24), rateHz, { band }, sampled(4 * rateHz, rateHz, volts));
    const [finding, ...more] = found.filter(({ code }) => code === 'uneven-teeth');
    expect(more).toEqual([]);
    expect(finding!.evidence).toMatchObject({ position: 5, teeth: 1 });
    expect(finding!.evidence.swingPercent).toBeCloseTo(percent, 0);
    expect(finding!.evidence.othersV).toBeCloseTo(2, 1);
  });

  it('cannot be told from a shaft that sways several times a turn', () => {
    const turnsAt = (t: number) => 10 * t + (0.08 / (2 * Math.PI * 6)) * Math.sin(2 * Math.PI * 60 * t);
    const [finding] = uneven(testRig('single', 24), 4, wheelVolts({ positions: 24, turnsAt }));
    expect(finding).toMatchObject({ outcome: 'cannot-tell', severity: 'note', evidence: { order: 6 } });
    // 8 % at its peak, averaged over a quarter of its wave from tooth to tooth.
    expect(finding!.evidence.stepPercent).toBeCloseTo(7, 0);
    expect(finding!.remedy).toContain('another speed');
  });

  it('are not said of sound wheels: rough, noisy, swaying once a turn, on ramps, stopping, reversing', () => {
    const random = normal(seeded(21));
    for (const positions of [8, 24, 60]) {
      const places = Array.from({ length: positions }, () => 0.01 * random());
      for (const turnsAt of [
        (t: number) => 8 * t,
        (t: number) => 8 * t + (0.1 / (2 * Math.PI)) * Math.sin(2 * Math.PI * 8 * t),
        (t: number) => 3 * t + 0.8 * t * t,
        (t: number) => (t % 5 < 1 ? 2 * (t % 5) ** 2 : t % 5 < 2.5 ? 2 + 4 * ((t % 5) - 1) : 8),
        (t: number) => 9 * Math.sin(t),
      ]) {
        const made = { positions, placeOf: (k: number) => places[k]!, turnsAt };
        const volts = wheelVolts(made);
        expect(uneven(testRig('single', positions), 8, (t) => volts(t) + 0.04 * random())).toEqual([]);
      }
    }
  }, 20_000);

  it('are let go at a stop, since a plain wheel may go on with other numbers', () => {
    const turnsAt = (t: number) => Math.min(10 * t, 40);
    const volts = wheelVolts({ positions: 24, placeOf: (k) => (k === 7 ? 0.1 : 0), turnsAt });
    const [finding, ...more] = uneven(testRig('single', 24), 10, volts);
    expect(more).toEqual([]);
    expect(finding!.to!).toBeGreaterThan(3.8);
    expect(finding!.to!).toBeLessThan(6.5);
  });
});
