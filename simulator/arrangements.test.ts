import { describe, expect, it } from 'vitest';
import { createRig, type RigSpec } from '@/simulator/rig-model';
import type { PulseSensor } from '@/simulator/sensor';
import { setupOf } from '@/simulator/setup';
import { linear, poles, risesOf, switching, toothed, voltsOf } from '@/simulator/test-rigs';

const words = { name: 'Test stand', expectedDirection: null, ratedRpm: null } as const;
const roles = (spec: RigSpec, sensing: Parameters<typeof setupOf>[1]['sensing']) =>
  setupOf(spec, { ...words, sensing }, 5).channels.map(({ role }) => role);

const halls = [0, 120, 240].map((placeDeg, i) => switching('UVW'[i] as string, { placeDeg }));
const index = { atTurns: 0.3, widthTurns: 0.06, fieldMt: 40 };

describe('sensing arrangements', () => {
  it('gives each channel the role that it has', () => {
    const z = linear('Z', { track: 'index' });
    expect(roles({ ...poles, channels: halls }, 'three-hall')).toEqual(['U', 'V', 'W']);
    expect(roles({ ...toothed, channels: [linear('A'), linear('B'), z] }, 'quadrature')).toEqual([
      'A',
      'B',
      'Z',
    ]);
    expect(roles({ ...toothed, channels: [linear('A'), z] }, 'single')).toEqual(['A', 'Z']);
    expect(roles({ ...toothed, channels: [linear('A'), linear('T', { role: 'aux' })] }, 'single')).toEqual([
      'A',
      'aux',
    ]);
  });

  it('three Hall sensors pass six states, never all alike, in the order of the ring', () => {
    const volts = voltsOf({ ...poles, channels: halls }, 1) as [number[], number[], number[]];
    const states: string[] = [];
    // Open drain: closed, low, is the active state.
    volts[0].forEach((_, i) => {
      const state = volts.map((channel) => ((channel[i] as number) < 2.5 ? 1 : 0)).join('');
      if (i > 100 && state !== states[states.length - 1]) states.push(state);
    });
    const ring = ['100', '110', '010', '011', '001', '101'];
    const begin = ring.indexOf(states[0] as string);
    states.forEach((state, i) => expect(state).toBe(ring[(begin + i) % 6]));
    expect(Math.abs(states.length - 20 * 6)).toBeLessThan(3);
  });

  it('an index mark comes once a turn, whatever the wheel', () => {
    const spec = { ...toothed, index, channels: [linear('A'), linear('Z', { track: 'index' })] };
    const [, z] = voltsOf(spec, 4) as [number[], number[]];
    const marks = risesOf(z, 3, 2.7);
    expect(marks).toHaveLength(20);
    for (const at of marks) expect(Math.abs((at % 2000) / 2000 - 0.3)).toBeLessThan(0.03);
  });
});

const pulse: PulseSensor = {
  kind: 'pulse',
  operateMt: 10,
  releaseMt: -10,
  weakBelowMt: 40,
  widths: { forwardS: 0.0004, reverseS: 0.0008, weakS: 0.0002 },
  lowV: 1,
  highV: 4,
  lineS: 2e-6,
};
const coded: RigSpec = {
  ...toothed,
  rateHz: 50_000,
  channels: [{ name: 'A', placeDeg: 0, sensor: pulse, electronics: { noiseRmsV: 0 } }],
};

describe('width-coded sensor', () => {
  const widthsOf = (volts: readonly number[]) =>
    risesOf(volts, 2.5, 2.5).map((at) => (volts.findIndex((v, i) => i > at && v < 2.5) - at) / 50_000);

  it('gives one pulse a tooth, as wide as the way it turns', () => {
    const forward = widthsOf(voltsOf(coded, 0.5)[0] as number[]);
    const motion = { startRpm: -300, segments: [{ durationS: 10, toRpm: -300 }] };
    const reverse = widthsOf(voltsOf({ ...coded, motion }, 0.5)[0] as number[]);
    expect(forward.length).toBeGreaterThan(28);
    expect(reverse.length).toBeGreaterThan(28);
    for (const width of forward) expect(Math.abs(width - 0.0004)).toBeLessThan(2.1e-5);
    for (const width of reverse) expect(Math.abs(width - 0.0008)).toBeLessThan(2.1e-5);
  });

  it('warns of a tooth that swings too little', () => {
    const far = { ...coded, gapMm: 2 };
    const widths = widthsOf(voltsOf(far, 0.5)[0] as number[]);
    for (const width of widths.slice(2)) expect(Math.abs(width - 0.0002)).toBeLessThan(2.1e-5);
  });

  it('tells its classes in the setup, and is a switch to the hub', () => {
    const setup = setupOf(coded, { ...words, sensing: 'width-coded' }, 5);
    expect(setup.wheel.widthClasses).toEqual([
      { widthS: 0.0004, means: 'forward' },
      { widthS: 0.0008, means: 'reverse' },
      { widthS: 0.0002, means: 'weak' },
    ]);
    expect(setup.channels[0]?.sensor).toMatchObject({ kind: 'switch', activeLow: false });
  });

  it('is the same however the run is cut', () => {
    const whole = createRig(coded, 3).block(0, 4000)[0] as Float32Array;
    const rig = createRig(coded, 3);
    for (const [from, to] of [
      [0, 7],
      [7, 1500],
      [1500, 4000],
    ] as const)
      expect(rig.block(from, to - from)[0]).toEqual(whole.subarray(from, to));
  });
});
