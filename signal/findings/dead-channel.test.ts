import { describe, expect, it } from 'vitest';
import { ringVolts, speeds } from '@/signal/findings/test-rings';
import type { Ring } from '@/signal/findings/test-rings';
import { watchFindings } from '@/signal/findings/test-watch';
import type { RigSetup } from '@/signal/model';
import { testChannel, testRig } from '@/signal/test-signals';

const rateHz = 4000;
const pair: Ring = {
  rateHz,
  seconds: 10,
  positions: 12,
  turnsAt: (t) => 4 * t,
  placesDeg: [0, 90],
  shape: 'sine',
};
const three: Ring = { ...pair, placesDeg: [0, 120, 240] };
/** One channel shows that instead from 3 s to 6 s. */
const instead =
  (lane: number, level: (t: number) => number): Ring['spoil'] =>
  (volts, channel, t) =>
    channel === lane && t > 3 && t < 6 ? level(t) : volts;

function found(arrays: Float64Array[], rig: RigSetup) {
  return watchFindings(rig, rateHz, {}, ...arrays).filter(({ code }) => code === 'dead-channel');
}

describe('a channel beside others', () => {
  it('is dead where it makes no edge while they do, whatever its level, and comes back', () => {
    for (const level of [0, 1.65, 3.3]) {
      const rig = testRig('quadrature', 12);
      const [seen, more] = found(ringVolts({ ...pair, spoil: instead(1, () => level) }), rig);
      expect(more).toBeUndefined();
      expect(seen).toMatchObject({ channel: 'B', severity: 'fault', outcome: 'found' });
      expect(seen!.openedS).toBeLessThan(4);
      expect(seen!.to).toBeGreaterThan(5.8);
      expect(seen!.to).toBeLessThan(6.2);
    }
    const [third] = found(ringVolts({ ...three, spoil: instead(2, () => 0.4) }), testRig('three-hall', 12));
    expect(third).toMatchObject({ channel: 'W' });
  });

  it('is dead where nothing comes on it but the mains', () => {
    const hum = (t: number) => 1.65 + 0.9 * Math.sin(2 * Math.PI * 50 * t);
    const ring: Ring = { ...pair, turnsAt: (t) => 6 * t, spoil: instead(1, hum) };
    const [seen] = found(ringVolts(ring), testRig('quadrature', 12));
    expect(seen).toMatchObject({ channel: 'B', evidence: { humHz: 50 } });
    expect(seen!.openedS).toBeLessThan(5);
    // A wheel whose teeth come with the mains is sound.
    expect(found(ringVolts({ ...pair, turnsAt: (t) => (50 * t) / 12 }), testRig('quadrature', 12))).toEqual(
      [],
    );
  });

  it('is not dead while the shaft stands and the mains are on the other line, nor while it swings within its band', () => {
    const start = (t: number) => (t < 4 ? 0 : 4 * (t - 4));
    const hum: Ring['spoil'] = (volts, channel, t) =>
      channel === 0 ? volts + 0.01 * Math.sin(2 * Math.PI * 50 * t) : volts;
    expect(
      found(ringVolts({ ...pair, turnsAt: start, noiseV: 0.0004, spoil: hum }), testRig('quadrature', 12)),
    ).toEqual([]);
    // To and fro by a fifth of a tooth about an edge of A: B goes up and down near its top.
    const shakes = (t: number) => (t < 4 ? 4 * t : 16 + (0.2 * Math.sin(2 * Math.PI * 9 * (t - 4))) / 12);
    expect(found(ringVolts({ ...pair, turnsAt: shakes, noiseV: 0.005 }), testRig('quadrature', 12))).toEqual(
      [],
    );
  });

  it('is not dead at rest, at a start, at a crawl, or with an empty aux channel beside it', () => {
    const rig = testRig('quadrature', 12);
    const busy = speeds([0, 0], [2, 0], [3, 4], [5, 4], [6, 0], [8, 0], [9, -0.1], [10, -0.1]);
    expect(found(ringVolts({ ...pair, turnsAt: busy, noiseV: 0.03 }), rig)).toEqual([]);
    rig.channels.push(testChannel('X', 'aux'));
    expect(found([...ringVolts(pair), new Float64Array(10 * rateHz)], rig)).toEqual([]);
  });
});

describe('an index channel', () => {
  const withIndex = testRig('single', 12);
  withIndex.channels.push(testChannel('Z', 'Z'));
  const one: Ring = { ...pair, placesDeg: [0] };
  const index = (fromS: number, toS: number) =>
    Float64Array.from({ length: 10 * rateHz }, (_v, i) => {
      const t = i / rateHz;
      return (4 * t) % 1 < 0.04 && !(t > fromS && t < toS) ? 3 : 1.65;
    });

  it('is dead where it has not come for several turns', () => {
    const [seen, more] = found([...ringVolts(one), index(3, 6)], withIndex);
    expect(more).toBeUndefined();
    expect(seen).toMatchObject({ channel: 'Z' });
    expect(seen!.evidence.turnsWithoutIndex).toBeGreaterThan(4.9);
    // Five turns take 1.25 s.
    expect(seen!.openedS).toBeGreaterThan(4);
    expect(seen!.openedS).toBeLessThan(4.8);
    expect(seen!.to).toBeLessThan(6.6);
    const [never] = found([...ringVolts(one), index(0, 10)], withIndex);
    expect(never).toMatchObject({ channel: 'Z', to: null });
  });

  it('is not dead where it comes, nor while the shaft stands', () => {
    expect(found([...ringVolts(one), index(20, 20)], withIndex)).toEqual([]);
    const halts = { ...one, turnsAt: speeds([0, 4], [2, 4], [3, 0], [10, 0]) };
    const silent = index(2, 10);
    expect(found([...ringVolts(halts), silent], withIndex)).toEqual([]);
  });
});

describe('a channel alone', () => {
  it('is dead at the end of its supply or of its converter, and anywhere else just stands', () => {
    const rig = testRig('single', 12);
    const at = (level: number) => {
      const [seen] = found(ringVolts({ ...pair, placesDeg: [0], spoil: instead(0, () => level) }), rig);
      return seen?.evidence.levelV ?? null;
    };
    expect(at(0)).toBe(0);
    expect(at(3.28)).toBe(3.28);
    for (const level of [0.3, 1.65, 2.9]) expect(at(level)).toBeNull();
    const codes = testRig('single', 12);
    codes.channels = [testChannel('A', 'A', { minCode: 0, maxCode: 2700 })];
    codes.channels[0]!.sensor.supplyV = null;
    const [volts] = ringVolts({ ...pair, placesDeg: [0], spoil: instead(0, () => 2.7) });
    const ended = Int16Array.from(volts!, (v) => Math.round(1000 * v));
    const list = watchFindings(codes, rateHz, {}, ended).filter(({ code }) => code === 'dead-channel');
    expect(list[0]!.evidence.levelV).toBeCloseTo(2.7, 3);
  });
});
