import { describe, expect, it } from 'vitest';
import { ringVolts, speeds } from '@/signal/findings/test-rings';
import type { Ring } from '@/signal/findings/test-rings';
import { watchFindings } from '@/signal/findings/test-watch';
import type { RigSetup } from '@/signal/model';
import { testRig } from '@/signal/test-signals';

const pair: Ring = {
  rateHz: 10_000,
  seconds: 6,
  positions: 12,
  turnsAt: (t) => 20 * t,
  placesDeg: [0, 90],
  shape: 'sine',
};
const expected = (expectedDirection: RigSetup['expectedDirection']) =>
  testRig('quadrature', 12, 0, { expectedDirection });

function found(ring: Ring, rig: RigSetup = testRig('quadrature', 12)) {
  const list = watchFindings(rig, ring.rateHz, {}, ...ringVolts(ring));
  return list.filter(({ code }) => code === 'direction-flip');
}

describe('a direction that changed at speed', () => {
  it('is found where a line turns over, with the speed at which it did, and is over some time later', () => {
    const ring = {
      ...pair,
      seconds: 12,
      spoil: (volts: number, channel: number, t: number) =>
        channel === 1 && t > 3.004 ? 3.3 - volts : volts,
    };
    const [one, more] = found(ring);
    expect(more).toBeUndefined();
    expect(one).toMatchObject({ severity: 'fault', outcome: 'found', evidence: { flips: 1 } });
    expect(one!.at).toBeCloseTo(3.004, 1);
    expect(one!.openedS).toBeLessThan(3.5);
    expect(one!.evidence.speedRpm).toBeCloseTo(1200, -1);
    expect(one!.to).toBeLessThan(4);
  });

  it('is found where the channels stand so nearly in phase that noise decides which one leads', () => {
    const [one] = found({ ...pair, placesDeg: [0, 178], noiseV: 0.08 });
    expect(one).toMatchObject({ severity: 'fault' });
    expect(Number(one!.evidence.flips)).toBeGreaterThan(3);
    expect(one!.causedBy).not.toBeNull();
  });

  it('cannot be told from a servo where the teeth are slow enough', () => {
    const [one] = found({
      ...pair,
      seconds: 9,
      turnsAt: (t) => 4 * t,
      spoil: (volts, channel, t) => (channel === 1 && t > 3.004 ? 3.3 - volts : volts),
    });
    // 4 pi 48^2 / 12 = 2413 rad/s2 at 48 teeth a second; 603 at 24.
    expect(one).toMatchObject({ outcome: 'found' });
    const [slow] = found({
      ...pair,
      seconds: 9,
      turnsAt: (t) => 2 * t,
      spoil: (volts, channel, t) => (channel === 1 && t > 3.004 ? 3.3 - volts : volts),
    });
    expect(slow).toMatchObject({ severity: 'warn', outcome: 'cannot-tell' });
    expect(slow!.evidence.neededRadPerS2).toBeCloseTo(603, -1);
  });

  it('is not made of real reversals, slow or sudden, nor of a shaft that swings by more than a tooth', () => {
    const moves = [
      speeds([0, 0], [1, 20], [3, 20], [4, -20], [6, -20]),
      // From 20 turns a second to 20 the other way within 0.1 s: 2500 rad/s2.
      speeds([0, 20], [3, 20], [3.1, -20], [6, -20]),
      // A servo that turns back within a slow tooth.
      speeds([0, 0.3], [3, 0.3], [3.02, -0.3], [6, -0.3]),
      (t: number) => 0.4 * Math.sin(2 * Math.PI * 3 * t),
      (t: number) => 0.15 * Math.sin(2 * Math.PI * 8 * t) + 0.02 * t,
    ];
    for (const turnsAt of moves) {
      expect(found({ ...pair, turnsAt })).toEqual([]);
      expect(found({ ...pair, turnsAt, shape: { duty: [0.45, 0.45] }, noiseV: 0.04 })).toEqual([]);
    }
  });
});

describe('a shaft that turns against its expected direction', () => {
  it('cannot be told from swapped channels, and the remedy says what to do', () => {
    const [one, more] = found(pair, expected('reverse'));
    expect(more).toBeUndefined();
    expect(one).toMatchObject({ severity: 'warn', outcome: 'cannot-tell', to: null });
    expect(one!.openedS).toBeLessThan(2);
    expect(one!.evidence).toMatchObject({ turned: 'forward', expected: 'reverse' });
    expect(one!.remedy).toContain('by hand');
  });

  it('is said after three turns, not before', () => {
    const slow = { ...pair, seconds: 8, turnsAt: (t: number) => 0.5 * t };
    const [one] = found(slow, expected('reverse'));
    expect(one!.openedS).toBeGreaterThan(6);
    expect(one!.openedS).toBeLessThan(7.5);
  });

  it('is told where one line is upside down', () => {
    const [one] = found(
      { ...pair, rateHz: 20_000, placesDeg: [0, 90 + 0.62 * 360], shape: { duty: [0.62, 0.38] } },
      expected('forward'),
    );
    expect(one).toMatchObject({ outcome: 'found', causedBy: 'inverted-channel' });
  });

  it('ends when the shaft turns the expected way, and is not said of one that does', () => {
    const back = { ...pair, seconds: 10, turnsAt: speeds([0, -10], [4, -10], [5, 10], [10, 10]) };
    const [one] = found(back, expected('forward'));
    expect(one!.to).toBeGreaterThan(3.5);
    expect(one!.to).toBeLessThan(5.2);
    expect(found(pair, expected('forward'))).toEqual([]);
    // Back by less than three turns.
    const little = {
      ...pair,
      seconds: 10,
      turnsAt: speeds([0, 5], [4, 5], [5, -2], [5.5, -2], [6, 5], [10, 5]),
    };
    expect(found(little, expected('forward'))).toEqual([]);
  });
});
