import { describe, expect, it } from 'vitest';
import { watchFindings } from '@/signal/findings/test-watch';
import type { Watched } from '@/signal/findings/test-watch';
import type { Settings } from '@/signal/model';
import { normal, sampled, seeded, testRig, toothWheel } from '@/signal/test-signals';

const rateHz = 10_000;
const speeds = [3, 10, 40];

/** A wheel of 8 teeth, 2 V of swing about 1.65 V, whose middle is moved. */
function drifts(
  turnsAt: (t: number) => number,
  moved: (t: number) => number,
  { seconds = 9, settings = {} as Partial<Settings>, seed = 1 } = {},
): Watched[] {
  const noise = normal(seeded(seed));
  const wheel = toothWheel(8, 0, turnsAt);
  const volts = sampled(seconds * rateHz, rateHz, (t) => wheel(t) + moved(t) + 0.02 * noise());
  return watchFindings(testRig('single', 8), rateHz, settings, volts).filter(
    ({ code }) => code === 'offset-drift',
  );
}

describe('offset drift', () => {
  it.each(speeds)(
    'a step of a fifth of the swing is found within 2 s and goes with it, %i turns a second',
    (speed) => {
      const found = drifts(
        (t) => speed * t,
        (t) => (t > 3 && t < 6 ? 0.4 : 0),
      );
      expect(found).toHaveLength(1);
      const { openedS, from, to, severity, evidence } = found[0]!;
      expect(openedS).toBeGreaterThan(3);
      expect(openedS).toBeLessThan(5);
      expect(from).toBeGreaterThan(2.5);
      expect(to).toBeGreaterThan(5.5);
      expect(to).toBeLessThan(7.1);
      expect(severity).toBe('warn');
      expect(evidence.movedV).toBeCloseTo(0.4, 1);
      expect(evidence.usualSwingV).toBeCloseTo(2, 0);
    },
  );

  it('a slow drift downwards is found once it is a sixth of the swing, and stays', () => {
    const found = drifts(
      (t) => 20 * t,
      (t) => -0.05 * t,
      { seconds: 12 },
    );
    expect(found).toHaveLength(1);
    expect(found[0]!.openedS).toBeGreaterThan(6);
    expect(found[0]!.openedS).toBeLessThan(9.5);
    expect(found[0]!.to).toBeNull();
    expect(found[0]!.evidence.movedV).toBeLessThan(-0.4);
  });

  it('is known in reverse too, where the shaft first turned forward', () => {
    const shaft = (t: number): number => (t < 4 ? 20 * t : 80 - 20 * (t - 4));
    const signal = (phase: number) => (t: number) =>
      1.65 - Math.cos(2 * Math.PI * (shaft(t) + phase)) + (t > 4 ? 0.5 : 0);
    const found = watchFindings(
      testRig('quadrature', 1),
      rateHz,
      {},
      sampled(8 * rateHz, rateHz, signal(0)),
      sampled(8 * rateHz, rateHz, signal(0.25)),
    ).filter(({ code }) => code === 'offset-drift');
    expect(found.map(({ channel }) => channel).sort()).toEqual(['A', 'B']);
    for (const { openedS } of found) expect(openedS).toBeLessThan(6);
  });

  it('nothing is said behind a filter that takes the middle away', () => {
    const filter = { kind: 'highpass', family: 'butterworth', order: 2, cutoffHz: 5 } as const;
    const moved = (t: number): number => (t > 3 ? 0.8 : 0);
    expect(drifts((t) => 20 * t, moved, { settings: { filter } })).toEqual([]);
    expect(drifts((t) => 20 * t, moved)).toHaveLength(1);
  });

  it('a gap that takes only the peaks of a one-sided signal away, a speed that changes and small wander are none', () => {
    const weaker = (t: number): number => (t > 4 ? 0.45 : 1);
    const volts = sampled(9 * rateHz, rateHz, (t) => 0.4 + weaker(t) * (1 - Math.cos(2 * Math.PI * 100 * t)));
    expect(
      watchFindings(testRig('single', 8), rateHz, {}, volts).filter(({ code }) => code === 'offset-drift'),
    ).toEqual([]);
    expect(
      drifts(
        (t) => 5 * t + t * t,
        (t) => 0.2 * Math.sin(0.7 * t),
      ),
    ).toEqual([]);
  });

  it('narrow pulses that a low pass draws to their mean at speed do not count as moved', () => {
    const shaft = (t: number): number =>
      t < 4 ? 3 * t : t < 8 ? 12 + 3 * (t - 4) + 2.5 * (t - 4) ** 2 : 64 + 23 * (t - 8);
    const pulse = (t: number): number => 0.3 + 2 * Math.exp(-(((((8 * shaft(t)) % 1) - 0.5) / 0.06) ** 2));
    const filter = { kind: 'lowpass', family: 'butterworth', order: 2, cutoffHz: 400 } as const;
    const found = watchFindings(
      testRig('single', 8),
      rateHz,
      { filter },
      sampled(12 * rateHz, rateHz, pulse),
    );
    expect(found.filter(({ code }) => code === 'offset-drift')).toEqual([]);
  });
});
