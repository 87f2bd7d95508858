import { describe, expect, it } from 'vitest';
import { watchFindings } from '@/signal/findings/test-watch';
import type { Watched } from '@/signal/findings/test-watch';
import type { RigSetup, SensorKind } from '@/signal/model';
import { normal, sampled, seeded, testChannel, testRig } from '@/signal/test-signals';

const rateHz = 10_000;

function rigOf(kind: SensorKind): RigSetup {
  const channel = testChannel('A', 'A');
  return testRig('single', 8, 0, { channels: [{ ...channel, sensor: { ...channel.sensor, kind } }] });
}

/** Soft pulses of 8 teeth, high for the share `duty` of each, with flanks of a twentieth of a tooth. */
function pulses(turnsAt: (t: number) => number, duty: (t: number) => number) {
  return (t: number): number => {
    const place = (((8 * turnsAt(t)) % 1) + 1) % 1;
    const rise = Math.min(1, Math.max(0, (place - 0.1) / 0.05 + 0.5));
    const fall = Math.min(1, Math.max(0, (place - 0.1 - duty(t)) / 0.05 + 0.5));
    return 0.4 + 2.4 * (rise - fall);
  };
}

function shifts(volts: (t: number) => number, seconds: number, kind: SensorKind = 'switch'): Watched[] {
  const noise = normal(seeded(3));
  return watchFindings(
    rigOf(kind),
    rateHz,
    {},
    sampled(seconds * rateHz, rateHz, (t) => volts(t) + 0.02 * noise()),
  ).filter(({ code }) => code === 'duty-shift');
}

describe('duty shift', () => {
  it.each([3, 10, 30])(
    'is found within 2 s where the high share moves by 0.08 at %i turns a second',
    (speed) => {
      const duty = (t: number): number => (t > 3 && t < 6 ? 0.43 : 0.35);
      const found = shifts(
        pulses((t) => speed * t, duty),
        9,
      );
      expect(found).toHaveLength(1);
      const { openedS, to, severity, evidence, channel } = found[0]!;
      expect(channel).toBe('A');
      expect(openedS).toBeGreaterThan(3);
      expect(openedS).toBeLessThan(5);
      expect(to).toBeGreaterThan(5.5);
      expect(to).toBeLessThan(7.1);
      expect(severity).toBe('warn');
      expect(evidence.usualDuty).toBeCloseTo(0.35, 2);
      expect(evidence.shift).toBeCloseTo(0.08, 2);
    },
  );

  it('a speed that ramps, a start and another speed with another duty are none', () => {
    const ramp = (t: number): number => (t < 1 ? 0 : t < 6 ? 3 * (t - 1) ** 2 : 75 + 30 * (t - 6));
    expect(
      shifts(
        pulses(ramp, (t) => (t < 6 ? 0.35 : 0.45)),
        11,
      ),
    ).toEqual([]);
    const step = (t: number): number =>
      t < 4 ? 10 * t : t < 5 ? 40 + 10 * (t - 4) + 5 * (t - 4) ** 2 : 55 + 20 * (t - 5);
    expect(
      shifts(
        pulses(step, (t) => (t < 4 ? 0.35 : t < 5 ? 0.35 + 0.1 * (t - 4) : 0.45)),
        10,
      ),
    ).toEqual([]);
  });

  it('a swing that falls and takes the width of its pulses along is another matter', () => {
    const bell = (t: number): number => {
      const place = ((80 * t) % 1) - 0.5;
      return 0.4 + (t > 3 ? 1 : 2) * Math.exp(-((place / 0.2) ** 2));
    };
    const fixed = { mode: 'fixed', operateV: 1.1, releaseV: 0.9 } as const;
    const found = watchFindings(rigOf('linear'), rateHz, { band: fixed }, sampled(7 * rateHz, rateHz, bell));
    expect(found.map(({ code }) => code)).not.toContain('duty-shift');
  });

  it('a latch that is high for a fifth of the time is told so without any baseline, a switch is not', () => {
    const narrow = pulses(
      (t) => 10 * t,
      () => 0.2,
    );
    const found = shifts(narrow, 4, 'latch');
    expect(found).toHaveLength(1);
    expect(found[0]!.openedS).toBeLessThan(2.1);
    expect(found[0]!.evidence.expectedDuty).toBe(0.5);
    expect(found[0]!.message).toContain('latch');
    expect(shifts(narrow, 4, 'switch')).toEqual([]);
    const even = pulses(
      (t) => 10 * t,
      () => 0.42,
    );
    expect(shifts(even, 4, 'latch')).toEqual([]);
  });
});
