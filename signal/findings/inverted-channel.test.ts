import { describe, expect, it } from 'vitest';
import { ringVolts, speeds } from '@/signal/findings/test-rings';
import type { Ring } from '@/signal/findings/test-rings';
import { watchFindings } from '@/signal/findings/test-watch';
import type { RigSetup } from '@/signal/model';
import { testChannel, testRig } from '@/signal/test-signals';

const three: Ring = {
  rateHz: 5000,
  seconds: 4,
  positions: 4,
  turnsAt: (t) => 10 * t,
  placesDeg: [0, 120, 240],
  shape: 'sine',
};
const upsideDown = (lane: number, fromS = 0, toS = Infinity) => ({
  spoil: (volts: number, channel: number, t: number) =>
    channel === lane && t >= fromS && t < toS ? 3.3 - volts : volts,
});

function found(ring: Ring, rig: RigSetup) {
  const list = watchFindings(rig, ring.rateHz, {}, ...ringVolts(ring));
  return list.filter(({ code }) => code === 'inverted-channel');
}

/** Unipolar switches that pull their line low while a tooth is before them. */
function switches(expectedDirection: RigSetup['expectedDirection'] = null): RigSetup {
  const rig = testRig('quadrature', 12, 0, { expectedDirection });
  const { sensor } = rig.channels[0]!;
  const unipolar = { ...sensor, kind: 'switch', activeLow: true } as const;
  return {
    ...rig,
    channels: rig.channels.map(({ name, role }) => testChannel(name, role, { sensor: unipolar })),
  };
}

describe('an inverted line of three', () => {
  it('is named, in either direction', () => {
    for (const [lane, name] of ['U', 'V', 'W'].entries()) {
      for (const turns of [10, -7]) {
        const ring = { ...three, turnsAt: (t: number) => turns * t, ...upsideDown(lane) };
        const [one] = found(ring, testRig('three-hall', 4));
        expect(one).toMatchObject({ channel: name, severity: 'fault', outcome: 'found', to: null });
        expect(one!.openedS).toBeLessThan(2.1);
        expect(one!.message).toContain(`Line ${name} is upside down`);
      }
    }
  });

  it('looks like a set that is spaced 60 degrees, and says so', () => {
    const [one] = found({ ...three, placesDeg: [0, 60, 120] }, testRig('three-hall', 4));
    expect(one).toMatchObject({ channel: 'V' });
    expect(one!.remedy).toContain('60 degrees');
  });

  it('is the cause of the states that never should be, comes with the fault and goes with it', () => {
    const ring = { ...three, seconds: 12, ...upsideDown(1, 3, 7) };
    const list = watchFindings(testRig('three-hall', 4), ring.rateHz, {}, ...ringVolts(ring));
    const [one, more] = list.filter(({ code }) => code === 'inverted-channel');
    expect(more).toBeUndefined();
    expect(one!.openedS).toBeGreaterThan(3);
    expect(one!.openedS).toBeLessThan(5);
    expect(one!.to).toBeGreaterThan(6.4);
    expect(one!.to).toBeLessThan(8.2);
    expect(list.find(({ code }) => code === 'illegal-state')?.causedBy).toBe('inverted-channel');
    expect(list.map(({ code }) => code)).not.toContain('phase-error');
  });

  it('is not said of a sound set', () => {
    const busy = speeds([0, 0], [1, 8], [3, 8], [4, 0], [4.5, 0], [5.5, -8], [9, -8]);
    for (const noiseV of [0, 0.04])
      expect(found({ ...three, seconds: 9, turnsAt: busy, noiseV }, testRig('three-hall', 4))).toEqual([]);
  });
});

describe('an inverted line of a pair', () => {
  const pair: Ring = {
    ...three,
    rateHz: 20_000,
    positions: 12,
    placesDeg: [0, 90],
    shape: { duty: [0.62, 0.62] },
  };

  it('is told by duties that are mirror images, and named where the sensors are unipolar switches', () => {
    const mirrored: Ring = { ...pair, shape: { duty: [0.62, 0.38] } };
    expect(found(mirrored, switches())[0]).toMatchObject({
      channel: 'B',
      severity: 'fault',
      outcome: 'found',
    });
    expect(found({ ...pair, shape: { duty: [0.38, 0.62] } }, switches())[0]).toMatchObject({ channel: 'A' });
    expect(found(mirrored, testRig('quadrature', 12))[0]).toMatchObject({ channel: null });
  });

  it('is not said where both lean the same way, where they are even, or where the direction is as expected', () => {
    expect(found(pair, switches())).toEqual([]);
    expect(found({ ...pair, shape: { duty: [0.52, 0.48] } }, testRig('quadrature', 12))).toEqual([]);
    const mirrored: Ring = { ...pair, shape: { duty: [0.62, 0.38] } };
    expect(found(mirrored, switches('forward'))).toEqual([]);
    expect(found({ ...mirrored, turnsAt: (t) => -10 * t }, switches('forward'))).toHaveLength(1);
  });

  it('is seen to turn over at speed, though its duty is even', () => {
    const even: Ring = {
      ...pair,
      shape: 'sine',
      turnsAt: (t) => 20 * t,
      seconds: 12,
      ...upsideDown(1, 3.0021, 7.0013),
    };
    const [one, more] = found(even, testRig('quadrature', 12, 0, { expectedDirection: 'forward' }));
    expect(more).toBeUndefined();
    expect(one).toMatchObject({ channel: 'B', outcome: 'found' });
    expect(one!.from).toBeCloseTo(3.0021, 1);
    expect(one!.openedS).toBeLessThan(4);
    expect(one!.to).toBeGreaterThan(6.4);
    expect(one!.to).toBeLessThan(8);
    const [open] = found({ ...even, seconds: 5 }, testRig('quadrature', 12));
    expect(open).toMatchObject({ channel: 'B', outcome: 'cannot-tell' });
  });
});
