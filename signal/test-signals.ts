/** Small signals for the tests beside: seeded, so that a failing run can be repeated. Not part of the product. */
import type { Channel, RigSetup, Sensing, Settings } from '@/signal/model';
import { defaultSettings } from '@/signal/model';
import { createPipeline } from '@/signal/pipeline';
import type { Pipeline } from '@/signal/pipeline-types';

/** Uniform numbers in [0, 1) from a 32-bit seed (mulberry32, public domain). */
export function seeded(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

/** Normal numbers, mean 0 and rms 1 (Box and Muller 1958). */
export function normal(random: () => number): () => number {
  return () => Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(2 * Math.PI * random());
}

export function testChannel(name: string, role: Channel['role'], more: Partial<Channel> = {}): Channel {
  return {
    name,
    role,
    voltsPerCode: 0.001,
    codeOffset: 0,
    minCode: null,
    maxCode: null,
    maxInputV: 3.3,
    sensor: {
      kind: 'linear',
      supplyV: 3.3,
      quiescentV: 1.65,
      sensitivityMvPerMt: 30,
      activeLow: false,
      operateMt: null,
      releaseMt: null,
    },
    ...more,
  };
}

export function testRig(
  sensing: Sensing,
  pulsesPerTurn: number,
  missingPulses = 0,
  more: Partial<RigSetup> = {},
): RigSetup {
  const roles = {
    single: ['A'],
    quadrature: ['A', 'B'],
    'three-hall': ['U', 'V', 'W'],
    'width-coded': ['A'],
  } as const;
  return {
    sensing,
    wheel: { pulsesPerTurn, missingPulses, gearRatio: 1, widthClasses: null },
    channels: roles[sensing].map((role) => testChannel(role, role)),
    expectedDirection: null,
    ratedRpm: null,
    ...more,
  };
}

export function testPipeline(
  rig: RigSetup,
  rateHz: number,
  settings: Partial<Settings> = {},
  startIndex = 0,
): Pipeline {
  const made = createPipeline({
    rig,
    settings: { ...defaultSettings, ...settings },
    rateHz,
    channels: rig.channels.map(({ name }) => name),
    startIndex,
  });
  if (!made.ok) throw new Error(made.issue.detail);
  return made.value;
}

/** Volts at samples 0..n-1 from a function of time in seconds. */
export function sampled(n: number, rateHz: number, volts: (t: number) => number): Float64Array {
  return Float64Array.from({ length: n }, (_, i) => volts(i / rateHz));
}

/**
 * A wheel of soft teeth: 1.65 V -+ 1 V, a raised cosine for each tooth that is there, its top at the middle of the position.
 * @param turnsAt angle of the wheel in turns at time t.
 */
export function toothWheel(
  positions: number,
  missing: number,
  turnsAt: (t: number) => number,
): (t: number) => number {
  return (t) => {
    const place = turnsAt(t) * positions;
    const index = ((Math.floor(place) % positions) + positions) % positions;
    if (index >= positions - missing) return 0.65;
    return 1.65 - Math.cos(2 * Math.PI * place);
  };
}
