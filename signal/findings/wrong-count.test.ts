import { describe, expect, it } from 'vitest';
import { simpleRatio } from '@/signal/findings/count-claims';
import { watchFindings } from '@/signal/findings/test-watch';
import { wheelVolts } from '@/signal/findings/test-wheel';
import type { RigSetup } from '@/signal/model';
import { normal, sampled, seeded, testChannel, testRig } from '@/signal/test-signals';

const rateHz = 10_000;
type Volts = (t: number) => number;

function wrong(rig: RigSetup, seconds: number, ...volts: Volts[]) {
  const arrays = volts.map((at) => sampled(seconds * rateHz, rateHz, at));
  return watchFindings(rig, rateHz, {}, ...arrays).filter(({ code }) => code === 'wrong-count');
}

/** One pulse a turn, a hundredth of it wide. */
const index: Volts = (t) => (Math.abs(((t * 10 + 0.513) % 1) - 0.5) < 0.01 ? 3 : 0.3);

function withIndex(rig: RigSetup): RigSetup {
  return { ...rig, channels: [...rig.channels, testChannel('Z', 'Z')] };
}

function rough(positions: number, seed: number) {
  const random = normal(seeded(seed));
  const places = Array.from({ length: positions }, () => 0.008 * random());
  const noise = normal(seeded(seed + 1));
  return (made: Partial<Parameters<typeof wheelVolts>[0]> = {}): Volts => {
    const volts = wheelVolts({ positions, placeOf: (k) => places[k]!, ...made });
    return (t) => volts(t) + 0.002 * noise();
  };
}

describe('a wrong count', () => {
  it.each([
    [24, 48, '1 : 2'],
    [48, 24, '2 : 1'],
    [24, 36, '2 : 3'],
  ])('of a wheel of %d that is set up with %d is told by the index', (made, told, ratio) => {
    const rig = withIndex(testRig('single', told));
    const [finding, ...more] = wrong(rig, 3, wheelVolts({ positions: made }), index);
    expect(more).toEqual([]);
    expect(finding).toMatchObject({ outcome: 'found', severity: 'fault' });
    expect(finding!.evidence).toMatchObject({ by: 'index', setPulses: told, foundPulses: made, ratio });
    expect(finding!.evidence.speedTimes).toBeCloseTo(made / told, 9);
    expect(finding!.openedS).toBeLessThan(1);
    expect(finding!.message).toContain(`${made} pulses`);
  });

  it('in quadrature counts pulses, not steps', () => {
    const rig = withIndex(testRig('quadrature', 48));
    const a = wheelVolts({ positions: 24 });
    const [finding] = wrong(rig, 3, a, (t) => a(t - 0.25 / 240), index);
    expect(finding!.evidence).toMatchObject({ by: 'index', setPulses: 48, foundPulses: 24 });
  });

  it.each([
    ['missing teeth that were not told', 36, 1, 35, 0, 'gap', 36],
    ['missing teeth that were told away', 36, 2, 34, 0, 'gap', 36],
    ['one missing instead of two', 60, 1, 60, 2, 'gap', 60],
    ['two missing instead of one', 60, 2, 60, 1, 'gap', 60],
    ['another wheel', 36, 1, 60, 2, 'gap', 36],
    ['no gap where one was told', 34, 0, 36, 2, 'no gap', undefined],
  ] as const)('is told by the gap: %s', (_name, made, lacking, told, toldMissing, by, found) => {
    const rig = testRig('single', told, toldMissing);
    const [finding, ...more] = wrong(rig, 3, wheelVolts({ positions: made, missing: lacking }));
    expect(more).toEqual([]);
    expect(finding!.evidence).toMatchObject({
      by,
      setPulses: told,
      setMissing: toldMissing,
      foundMissing: lacking,
    });
    expect(finding!.evidence.foundPulses).toBe(found);
    expect(finding!.openedS).toBeLessThan(1.5);
  });

  it('is told by channels that do not count alike', () => {
    const a = wheelVolts({ positions: 24 });
    const b = wheelVolts({ positions: 48 });
    const [finding] = wrong(testRig('quadrature', 24), 4, a, b);
    expect(finding).toMatchObject({ channel: 'B', outcome: 'found' });
    expect(finding!.evidence).toMatchObject({ by: 'channels', channelPulses: 2, firstChannelPulses: 1 });
  });

  it('is told by the pattern of the teeth', () => {
    const [finding, ...more] = wrong(testRig('single', 24), 8, rough(48, 5)());
    expect(more).toEqual([]);
    expect(finding!.evidence).toMatchObject({ by: 'spacing', setPulses: 24, foundPulses: 48 });
    const [half] = wrong(testRig('single', 48), 8, rough(24, 6)());
    expect(half).toMatchObject({ outcome: 'cannot-tell', evidence: { by: 'spacing', foundPulses: 24 } });
  });

  it('ends when the shaft stops', () => {
    const turnsAt = (t: number) => Math.min(10 * t, 30);
    const [finding] = wrong(testRig('single', 35), 8, wheelVolts({ positions: 36, missing: 1, turnsAt }));
    expect(finding!.to).toBeLessThan(6);
  });

  it('is not said of a wheel that is set up as it is: even, rough, one tooth missing, with a burr, two gaps alike', () => {
    const oneOut = (k: number) => (k === 7 ? 0 : 1);
    const opposite = (k: number) => (k === 7 || k === 19 ? 0 : 1);
    const sound = wheelVolts({ positions: 24 });
    const burr: Volts = (t) => (Math.abs(((240 * t) % 24) - 9) < 0.06 ? 2.5 : sound(t));
    for (const volts of [
      sound,
      rough(24, 7)(),
      rough(24, 8)({ turnsAt: (t) => 4 * t + 0.5 * t * t }),
      rough(24, 9)({ turnsAt: (t) => 9 * Math.sin(t) }),
      wheelVolts({ positions: 24, strengthOf: oneOut }),
      wheelVolts({ positions: 24, strengthOf: opposite }),
      burr,
    ]) {
      expect(wrong(testRig('single', 24), 8, volts)).toEqual([]);
      if (volts !== sound && volts !== burr) continue;
      expect(wrong(withIndex(testRig('single', 24)), 8, volts, index)).toEqual([]);
    }
    const gapped = wheelVolts({ positions: 60, missing: 2 });
    expect(wrong(testRig('single', 60, 2), 6, gapped)).toEqual([]);
    expect(wrong(withIndex(testRig('single', 60, 2)), 6, gapped, index)).toEqual([]);
  }, 20_000);
});

describe('a simple ratio', () => {
  it('is the nearest one of whole numbers up to eight, in its lowest terms', () => {
    expect(simpleRatio(2)).toEqual({ p: 2, q: 1 });
    expect(simpleRatio(0.505)).toEqual({ p: 1, q: 2 });
    expect(simpleRatio(0.6667)).toEqual({ p: 2, q: 3 });
    expect(simpleRatio(1)).toEqual({ p: 1, q: 1 });
    expect(simpleRatio(1.06)).toBeNull();
    expect(simpleRatio(NaN)).toBeNull();
  });
});
