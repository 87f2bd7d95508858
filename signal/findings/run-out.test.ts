import { describe, expect, it } from 'vitest';
import { watchFindings } from '@/signal/findings/test-watch';
import { wheelVolts } from '@/signal/findings/test-wheel';
import type { RigSetup } from '@/signal/model';
import { normal, sampled, seeded, testRig } from '@/signal/test-signals';

const rateHz = 10_000;

function runOut(rig: RigSetup, seconds: number, volts: (t: number) => number) {
  const found = watchFindings(rig, rateHz, {}, sampled(seconds * rateHz, rateHz, volts));
  return found.filter(({ code }) => code === 'run-out');
}

const wave = (positions: number, share: number) => (k: number) =>
  1 + share * Math.cos((2 * Math.PI * (k - 3)) / positions);

describe('run-out', () => {
  it.each([
    [24, 0],
    [60, 2],
    [8, 0],
  ])('of a wheel of %d with %d missing is found by its swing, and let go', (positions, missing) => {
    const at = wave(positions, 0.25);
    const strengthOf = (k: number, t: number) => (t > 1.5 && t < 4 ? at(k) : 1);
    const volts = wheelVolts({ positions, missing, strengthOf });
    const [finding, ...more] = runOut(testRig('single', positions, missing), 8, volts);
    expect(more).toEqual([]);
    expect(finding).toMatchObject({ channel: 'A', outcome: 'found', severity: 'warn' });
    expect(finding!.evidence.swingPercent).toBeGreaterThan(12);
    expect(finding!.evidence.swingPercent).toBeLessThan(26);
    expect(finding!.openedS).toBeLessThan(3.5);
    expect(finding!.to!).toBeLessThan(6);
    // The strongest tooth is the place to look at.
    const place = ((finding!.at * 10 * positions) % positions) - 0.3 - 3;
    expect(Math.abs(place)).toBeLessThan(positions / 8);
  });

  it('cannot be told from a shaft that sways once a turn by the spacing alone', () => {
    const turnsAt = (t: number) => 10 * t + (0.02 / (2 * Math.PI)) * Math.sin(2 * Math.PI * 10 * t);
    const [finding, ...more] = runOut(testRig('single', 24), 4, wheelVolts({ positions: 24, turnsAt }));
    expect(more).toEqual([]);
    expect(finding).toMatchObject({ outcome: 'cannot-tell', severity: 'note' });
    expect(finding!.evidence.spacingPercent).toBeCloseTo(2, 1);
    // An angle of 0.02 / (2 pi) turns either way.
    expect(finding!.evidence.spacingDeg).toBeCloseTo(360 * (0.02 / (2 * Math.PI)), 1);
    expect(finding!.remedy).toContain('opposite');
  });

  it('is not said while all teeth shrink or grow at once', () => {
    const turnsAt = (t: number) => 0.9 * t;
    for (const after of [0.25, 4]) {
      // Looks fall on the ends of turns: half of the teeth have changed by then, or others.
      for (const fromS of [9, 9.25, 9.5, 9.75]) {
        const strengthOf = (_: number, t: number) => (t > fromS ? after : 1);
        const volts = wheelVolts({ positions: 60, turnsAt, strengthOf });
        expect(runOut(testRig('single', 60), 15, volts)).toEqual([]);
      }
    }
  });

  it('is not said of one weak tooth, of two waves a turn, nor on fewer than eight teeth', () => {
    const weak = wheelVolts({ positions: 8, strengthOf: (k) => (k === 3 ? 0.55 : 1) });
    expect(runOut(testRig('single', 8), 4, weak)).toEqual([]);
    const ellipse = (k: number) => 1 + 0.2 * Math.cos((4 * Math.PI * k) / 24);
    expect(runOut(testRig('single', 24), 4, wheelVolts({ positions: 24, strengthOf: ellipse }))).toEqual([]);
    expect(runOut(testRig('single', 6), 4, wheelVolts({ positions: 6, strengthOf: wave(6, 0.3) }))).toEqual(
      [],
    );
  });

  it('is not said of sound wheels: a little out of true, rough, noisy, on ramps, stopping, reversing', () => {
    const random = normal(seeded(31));
    for (const positions of [8, 24, 60]) {
      const places = Array.from({ length: positions }, () => 0.01 * random());
      for (const turnsAt of [
        (t: number) => 8 * t,
        (t: number) => 3 * t + 0.8 * t * t,
        (t: number) => (t % 5 < 1 ? 2 * (t % 5) ** 2 : t % 5 < 2.5 ? 2 + 4 * ((t % 5) - 1) : 8),
        (t: number) => 9 * Math.sin(t),
      ]) {
        const made = {
          positions,
          placeOf: (k: number) => places[k]!,
          strengthOf: wave(positions, 0.06),
          turnsAt,
        };
        const volts = wheelVolts(made);
        expect(runOut(testRig('single', positions), 8, (t) => volts(t) + 0.04 * random())).toEqual([]);
      }
    }
  }, 20_000);
});
