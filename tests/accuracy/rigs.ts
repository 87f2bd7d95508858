/**
 * Rigs of every arrangement, as the simulator's data and as the setup that the signal path is told. Only sizes that the
 * path cannot know differ from run to run; what is drawn at random is drawn from the case's own seed.
 */
import {
  defaultSettings,
  type ChannelRole,
  type RigSetup,
  type Sensing,
  type Settings,
} from '@/signal/model';
import { codeRange, type AdcSpec } from '@/simulator/adc';
import type { MotionSpec } from '@/simulator/motion';
import { createRig, type ChannelSpec, type Rig, type RigSpec } from '@/simulator/rig-model';
import type { LinearSensor, SwitchingSensor } from '@/simulator/sensor';
import type { WheelSpec } from '@/simulator/wheel';
import { idealOf, type Ideal } from '@/tests/accuracy/ideal';

export type Arrangement = {
  name: string;
  sensing: Sensing;
  wheel: WheelSpec;
  gapMm: number;
  sensor: LinearSensor | SwitchingSensor;
  /** Role and place in degrees of a position, in the order of the channels. */
  channels: { role: ChannelRole; placeDeg: number }[];
};

export type Bench = {
  arrangement: Arrangement;
  rig: Rig;
  setup: RigSetup;
  settings: Settings;
  ideal: Ideal;
  noiseV: number;
};

const rateHz = 20_000;
const adc: Extract<AdcSpec, { kind: 'codes' }> = {
  kind: 'codes',
  bits: 14,
  voltsPerCode: 5 / 16384,
  codeOffset: 0,
};

function linear(quiescentV: number, sensitivityMvPerMt: number): LinearSensor {
  return { kind: 'linear', quiescentV, sensitivityMvPerMt, lowRailV: 0, highRailV: 5 };
}

function toothed(positions: number, missing: number[], toothWidth: number): WheelSpec {
  return { kind: 'toothed', positions, missing, pitchMm: 6.3, modulationMt: 75, toothWidth };
}

function poleRing(positions: number): WheelSpec {
  return { kind: 'pole-ring', positions, pairLengthMm: 6, thicknessMm: 2, remanenceT: 0.24 };
}

const single: Arrangement['channels'] = [{ role: 'A', placeDeg: 0 }];

export const arrangements = {
  sine: {
    name: 'single, 24 teeth, near sine',
    sensing: 'single',
    wheel: toothed(24, [], 1),
    gapMm: 1,
    sensor: linear(2.5, 40),
    channels: single,
  },
  few: {
    name: 'single, 13 teeth, near sine',
    sensing: 'single',
    wheel: toothed(13, [], 1),
    gapMm: 1,
    sensor: linear(2.5, 40),
    channels: single,
  },
  pulses: {
    name: 'single, 8 magnets, unipolar pulses',
    sensing: 'single',
    wheel: {
      kind: 'magnets',
      positions: 8,
      pitchMm: 14,
      diameterMm: 5,
      lengthMm: 3,
      remanenceT: 1.1,
    },
    gapMm: 2.5,
    sensor: linear(0.8, 20),
    channels: single,
  },
  switched: {
    name: 'single, 8 magnets, switch on an open drain',
    sensing: 'single',
    wheel: {
      kind: 'magnets',
      positions: 8,
      pitchMm: 14,
      diameterMm: 5,
      lengthMm: 3,
      remanenceT: 1.1,
    },
    gapMm: 2.5,
    sensor: {
      kind: 'switch',
      operateMt: 30,
      releaseMt: 20,
      pullUpV: 5,
      pullUpOhm: 10_000,
      lineFarad: 2e-9,
      lowV: 0.3,
    },
    channels: single,
  },
  quadrature: {
    name: 'quadrature, pole ring of 16 pairs',
    sensing: 'quadrature',
    wheel: poleRing(16),
    gapMm: 1.1,
    sensor: linear(2.5, 40),
    channels: [
      { role: 'A', placeDeg: 0 },
      { role: 'B', placeDeg: 90 },
    ],
  },
  threeHall: {
    name: 'three-hall, pole ring of 4 pairs',
    sensing: 'three-hall',
    wheel: poleRing(4),
    gapMm: 1.1,
    sensor: linear(2.5, 40),
    channels: [
      { role: 'U', placeDeg: 0 },
      { role: 'V', placeDeg: 120 },
      { role: 'W', placeDeg: 240 },
    ],
  },
  missingTwo: {
    name: 'missing-tooth wheel 60-2',
    sensing: 'single',
    wheel: toothed(60, [58, 59], 0.8),
    gapMm: 1,
    sensor: linear(2.5, 40),
    channels: single,
  },
  missingOne: {
    name: 'missing-tooth wheel 36-1',
    sensing: 'single',
    wheel: toothed(36, [35], 0.6),
    gapMm: 1,
    sensor: linear(2.5, 40),
    channels: single,
  },
} satisfies Record<string, Arrangement>;

export type BenchOptions = {
  motion: MotionSpec;
  /** Rms of the ideal signal about its mean over that of the white noise from 0 to half the rate; Infinity: no noise. */
  snrDb: number;
  seed: number;
  settings?: Partial<Settings>;
  /** Standard deviation of a tooth's place, share of the pitch. */
  pitchErrorRms?: number;
  /** Added to the place of every channel, degrees of a position. */
  turnedDeg?: number;
};

export function createBench(arrangement: Arrangement, options: BenchOptions): Bench {
  const { motion, snrDb, seed, pitchErrorRms, turnedDeg = 0 } = options;
  const wheel: WheelSpec = pitchErrorRms ? { ...arrangement.wheel, pitchErrorRms } : arrangement.wheel;
  const channels = arrangement.channels.map(({ role, placeDeg }): ChannelSpec => ({
    name: role,
    placeDeg: placeDeg + turnedDeg,
    sensor: arrangement.sensor,
    electronics: { noiseRmsV: 0 },
  }));
  const bare: RigSpec = { rateHz, motion, wheel, gapMm: arrangement.gapMm, channels, adc, faults: [] };
  const ideal = idealFor(arrangement, bare);
  const noiseV = ideal.rmsV / 10 ** (snrDb / 20);
  const spec: RigSpec = {
    ...bare,
    channels: channels.map((channel) => ({ ...channel, electronics: { noiseRmsV: noiseV } })),
  };
  return {
    arrangement,
    rig: createRig(spec, seed),
    setup: setupOf(arrangement, spec),
    settings: { ...defaultSettings, ...options.settings },
    ideal,
    noiseV,
  };
}

const ideals = new Map<Arrangement, Ideal>();

function idealFor(arrangement: Arrangement, spec: RigSpec): Ideal {
  const known = ideals.get(arrangement) ?? idealOf(spec);
  ideals.set(arrangement, known);
  return known;
}

function setupOf({ sensing, wheel, channels, sensor }: Arrangement, spec: RigSpec): RigSetup {
  return {
    sensing,
    wheel: {
      pulsesPerTurn: wheel.positions,
      missingPulses: wheel.missing?.length ?? 0,
      gearRatio: spec.gearRatio ?? 1,
      widthClasses: null,
    },
    channels: channels.map(({ role }) => ({
      name: role,
      role,
      voltsPerCode: adc.voltsPerCode,
      codeOffset: adc.codeOffset,
      ...codeRange(adc),
      maxInputV: 5,
      sensor: {
        kind: sensor.kind,
        supplyV: 5,
        quiescentV: sensor.kind === 'linear' ? sensor.quiescentV : null,
        sensitivityMvPerMt: sensor.kind === 'linear' ? sensor.sensitivityMvPerMt : null,
        activeLow: sensor.kind !== 'linear',
        operateMt: sensor.kind === 'linear' ? null : sensor.operateMt,
        releaseMt: sensor.kind === 'linear' ? null : sensor.releaseMt,
      },
    })),
    expectedDirection: null,
    ratedRpm: null,
  };
}

/** Speed at which a position takes so many samples. */
export function rpmFor(arrangement: Arrangement, samplesPerPosition: number): number {
  return (60 * rateHz) / (samplesPerPosition * arrangement.wheel.positions);
}
