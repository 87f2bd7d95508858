import { describe, expect, it } from 'vitest';
import { watchFindings } from '@/signal/findings/test-watch';
import type { Watched } from '@/signal/findings/test-watch';
import type { Settings } from '@/signal/model';
import { normal, sampled, seeded, testRig } from '@/signal/test-signals';

const rateHz = 10_000;
const teeth = 60;
const fixed: Partial<Settings> = { band: { mode: 'fixed', operateV: 1.8, releaseV: 1.5 } };

type Case = { seconds?: number; settings?: Partial<Settings>; volts?: (cycles: number) => number };

const sine = (cycles: number) => 1.65 + Math.sin(2 * Math.PI * cycles);

/** One channel, `cyclesAt` teeth up to time t. */
function found(cyclesAt: (t: number) => number, holdoffS: number, more: Case = {}): Watched[] {
  const { seconds = 5, settings = {}, volts = sine } = more;
  const noise = normal(seeded(3));
  const samples = sampled(seconds * rateHz, rateHz, (t) => volts(cyclesAt(t)) + 0.01 * noise());
  return watchFindings(testRig('single', teeth), rateHz, { holdoffS, ...settings }, samples);
}

const at = (hz: number) => (t: number) => hz * t;

describe('a hold-off that eats teeth', () => {
  it.each([0.0017, 0.002, 0.0034, 0.01, 0.1])(
    'of %s s is found where half a tooth takes 1.67 ms',
    (holdoffS) => {
      for (const settings of [{}, fixed]) {
        const seen = found(at(300), holdoffS, { settings });
        const [own] = seen.filter(({ code }) => code === 'wrong-count');
        expect(own).toMatchObject({ severity: 'fault', outcome: 'found', to: null });
        expect(own!.openedS).toBeLessThan(2);
        const { evidence, message, remedy } = own!;
        expect(evidence).toMatchObject({ by: 'hold-off', holdoffS });
        expect(Number(evidence.toothS) * 300).toBeCloseTo(1, 1);
        expect(Number(evidence.limitS) * 600).toBeCloseTo(1, 1);
        expect(evidence.limitRpm).toBeCloseTo(0.5 / holdoffS, 6);
        expect(message).toContain('hold-off');
        expect(remedy).toContain('rpm');
        expect(seen.filter(({ code, causedBy }) => code !== 'wrong-count' && causedBy === null)).toEqual([]);
      }
    },
  );

  it('folds what it makes of a ring: the lines stand where they should', () => {
    for (const holdoffS of [0.0034, 0.01]) {
      const [a, b] = [0, 0.25].map((lag) => sampled(5 * rateHz, rateHz, (t) => sine(300 * t - lag)));
      const seen = watchFindings(testRig('quadrature', teeth), rateHz, { holdoffS }, a!, b!);
      expect(seen.some(({ code }) => code === 'phase-error')).toBe(true);
      for (const { code, causedBy } of seen)
        expect(causedBy).toBe(code === 'wrong-count' ? null : 'wrong-count');
    }
  });

  it('goes once the shaft turns slowly enough for it', () => {
    const cyclesAt = (t: number) =>
      t < 4 ? 300 * t : t < 6 ? 1200 + 300 * (t - 4) - 62.5 * (t - 4) ** 2 : 1550 + 50 * (t - 6);
    const seen = found(cyclesAt, 0.0025, { seconds: 10 }).filter(({ code }) => code === 'wrong-count');
    expect(seen).toHaveLength(1);
    expect(seen[0]!.to).toBeGreaterThan(3.9);
    expect(seen[0]!.to).toBeLessThan(6.5);
  });
});

describe('nothing is said', () => {
  it('of a hold-off that is short enough, nor of narrow pulses of which it delays the end', () => {
    for (const settings of [{}, fixed]) expect(found(at(300), 0.0015, { settings })).toEqual([]);
    const narrow = (cycles: number) => (cycles % 1 < 0.1 ? 3.2 : 0.1);
    expect(found(at(300), 0.0008, { volts: narrow }).filter(({ code }) => code === 'wrong-count')).toEqual(
      [],
    );
  });

  it('of bounce that a hold-off keeps back, even where that is more than half as long as a state', () => {
    // Three times to and fro within a fifth of the tooth.
    const bounces = (cycles: number) => {
      const place = (2 * cycles) % 1;
      const high = Math.floor(2 * cycles) % 2 === 0;
      const isBack = place < 0.3 && Math.floor(place / 0.05) % 2 === 1;
      return high !== isBack ? 3.2 : 0.1;
    };
    for (const holdoffS of [0.004, 0.007])
      expect(
        found(at(50), holdoffS, { volts: bounces }).filter(({ code }) => code === 'wrong-count'),
      ).toEqual([]);
  });
});
