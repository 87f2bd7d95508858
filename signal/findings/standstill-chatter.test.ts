import { describe, expect, it } from 'vitest';
import { ringVolts, speeds } from '@/signal/findings/test-rings';
import type { Ring } from '@/signal/findings/test-rings';
import { watchFindings } from '@/signal/findings/test-watch';
import type { RigSetup, Settings } from '@/signal/model';
import { normal, seeded, testRig } from '@/signal/test-signals';

const rateHz = 4000;
const single = testRig('single', 12);
const quadrature = testRig('quadrature', 12);

/** Runs at 4 turns a second for 4 s, and has come to rest at 5 s where tooth 72 rises; then `more` turns are added. */
const stops = (more: (t: number) => number) => (t: number) =>
  speeds([0, 4], [4, 4], [5, 0])(t) - 18 + 6 + (t > 5.1 && t < 9 ? more(t) : 0);
/** To and fro by so large a part of a tooth either way, never twice the same. */
const shaking = (teeth: number) =>
  stops((t) => (teeth / 12) * (0.7 * Math.sin(2 * Math.PI * 7 * t) + 0.3 * Math.sin(2 * Math.PI * 11.3 * t)));

const one: Ring = {
  rateHz,
  seconds: 12,
  positions: 12,
  turnsAt: shaking(0.2),
  placesDeg: [0],
  shape: 'sine',
};
const pair: Ring = { ...one, placesDeg: [0, 90] };
const square: Ring['shape'] = { duty: [0.5, 0.5] };

function found(ring: Ring, rig: RigSetup, settings: Partial<Settings> = {}) {
  const list = watchFindings(rig, rateHz, settings, ...ringVolts(ring));
  return list.filter(({ code }) => code === 'standstill-chatter');
}

function expectChatter(ring: Ring, rig: RigSetup): void {
  const [seen, more] = found(ring, rig);
  expect(more).toBeUndefined();
  expect(seen).toMatchObject({ outcome: 'found' });
  expect(seen!.openedS).toBeGreaterThan(5);
  expect(seen!.openedS).toBeLessThan(7.2);
  expect(seen!.to).toBeGreaterThan(8);
  expect(seen!.to).toBeLessThan(9.5);
}

describe('a shaft that stands and shakes on a flank', () => {
  it('is found on one channel, linear or switching', () => {
    expectChatter(one, single);
    expectChatter({ ...one, noiseV: 0.03 }, single);
    expectChatter({ ...one, shape: square }, single);
    expect(found(one, single)[0]!.evidence.teethHz).toBeGreaterThan(5);
  });

  it('is found on a pair, and the other channel is not called dead', () => {
    expectChatter(pair, quadrature);
    expectChatter({ ...pair, shape: square }, quadrature);
    const codes = watchFindings(quadrature, rateHz, {}, ...ringVolts(pair)).map(({ code }) => code);
    expect(codes).not.toContain('dead-channel');
  });

  it('is found where a fixed band is narrower than the noise', () => {
    const gauss = normal(seeded(3));
    const noisy: Ring = {
      ...one,
      turnsAt: stops(() => 0),
      spoil: (volts, _channel, t) => volts + (t > 5.1 && t < 9 ? 0.05 * gauss() : 0),
    };
    const band = { mode: 'fixed', operateV: 1.7, releaseV: 1.6 } as const;
    const [seen] = found(noisy, single, { band });
    expect(seen).toMatchObject({ severity: 'fault' });
    expect(seen!.evidence.largestSwingV).toBeLessThan(0.6);
    expect(seen!.to).toBeLessThan(9.5);
  });
});

describe('a shaft that really moves', () => {
  it('is not taken for one: starts, stops, crawling, reversals, turning back and forth by more than a tooth', () => {
    const moves = [
      speeds([0, 0], [2, 0], [8, 4], [12, 4]),
      speeds([0, 4], [3, 4], [4, 0], [6, 0], [7, 4], [8, 0], [8.5, 0], [9, 4], [12, 4]),
      speeds([0, 4], [3, 4], [4, 0.05], [12, 0.05]),
      speeds([0, 4], [3, 4], [5, -4], [7, -4], [8, 4], [9, 4], [10, -1], [12, -1]),
      stops((t) => 0.12 * Math.sin(2 * Math.PI * 2 * t) + 0.05 * Math.sin(2 * Math.PI * 3.1 * t)),
      (t: number) => 0.3 * t,
    ];
    for (const turnsAt of moves) {
      for (const shape of ['sine', square] as const) {
        const sound = { turnsAt, shape, noiseV: 0.03, unevenness: 0.01 };
        expect(found({ ...pair, ...sound }, quadrature)).toEqual([]);
        if (moves.indexOf(turnsAt) !== 4) expect(found({ ...one, ...sound }, single)).toEqual([]);
      }
    }
  });

  it('is not taken for one where hum on a line at rest was taken for teeth before it started', () => {
    for (const [humV, startS, place] of [
      [0.02, 3, 0.01],
      [0.1, 0.8, 0],
    ] as const) {
      const hums: Ring = {
        ...one,
        turnsAt: (t) => place + speeds([0, 0], [3, 0], [3 + startS, 4], [12, 4])(t),
        spoil: (volts, _channel, t) => volts + humV * Math.sin(2 * Math.PI * 100 * t),
        noiseV: 0.001,
      };
      expect(found(hums, single)).toEqual([]);
    }
  });

  it('is not taken for one where a channel is dead, where lines are in phase, or where a tooth bounces', () => {
    const turning = (t: number) => 4 * t;
    const dies: Ring = {
      ...pair,
      turnsAt: turning,
      spoil: (volts, c, t) => (c === 1 && t > 4 ? 1.2 : volts),
    };
    expect(found(dies, quadrature)).toEqual([]);
    expect(found({ ...pair, turnsAt: turning, placesDeg: [0, 178], noiseV: 0.05 }, quadrature)).toEqual([]);
    const bounces: Ring = {
      ...one,
      turnsAt: turning,
      shape: square,
      spoil: (volts, _c, t) => ((t * 48) % 1 > 0.04 && (t * 48) % 1 < 0.09 ? 0.2 : volts),
    };
    expect(found(bounces, single)).toEqual([]);
  });
});
