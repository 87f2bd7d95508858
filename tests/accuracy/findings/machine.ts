/** A sound rig drawn at random, within what a case wants of it: the model's data and the setup that the hub is told. */
import type { RigSetup, Sensing, Settings } from '@/signal/model';
import { codeRange } from '@/simulator/adc';
import type { MotionSpec } from '@/simulator/motion';
import type { RigSpec } from '@/simulator/rig-model';
import { setupOf } from '@/simulator/setup';
import type { Draw } from '@/tests/accuracy/findings/draw';
import {
  drawSensor,
  indexSensorFor,
  type DrawnSensor,
  type SensorWord,
} from '@/tests/accuracy/findings/sensors';
import { drawAdc, drawChannels, rateFor, type Wants } from '@/tests/accuracy/findings/machine-parts';
import { drawSettings } from '@/tests/accuracy/findings/settings';
import {
  drawPositions,
  drawWheel,
  fieldOf,
  soundTolerances,
  type DrawnWheel,
  type Field,
  type WheelKind,
} from '@/tests/accuracy/findings/wheels';

export type { Wants };

/** A rig without motion and faults yet, and what cases need to know of it. */
export type Machine = {
  sensing: Sensing;
  wheel: DrawnWheel;
  field: Field;
  sensor: DrawnSensor;
  toothHz: number;
  /** Turns of the wheel a second at the fastest. */
  turnsPerS: number;
  /** Of the shaft. */
  rpm: number;
  gearRatio: number;
  rateHz: number;
  noiseV: number;
  rigSeed: number;
  still: Omit<RigSpec, 'motion' | 'faults'>;
  settings: Settings;
};

export type Bench = { spec: RigSpec; setup: RigSetup; settings: Settings; rigSeed: number };

const fits: Record<SensorWord, readonly WheelKind[]> = {
  linear: ['toothed', 'pole-ring', 'magnets'],
  latch: ['pole-ring'],
  switch: ['toothed', 'magnets'],
  pulse: ['toothed'],
};

export function drawMachine(draw: Draw, wants: Wants): Machine {
  const missing = draw.pick(wants.missing ?? [0]);
  const asked = draw.pick(wants.sensing ?? (['single', 'single', 'quadrature', 'three-hall'] as const));
  // A gap in the wheel says where it stands to a single sensor only.
  const sensing = missing > 0 ? 'single' : asked;
  const { word, kind } = drawMake(draw, sensing, missing, wants);
  const { positions, toothHz } = drawSpeed(draw, kind, missing, word, wants);
  const isRing = sensing === 'quadrature' || sensing === 'three-hall';
  const tolerances = wants.tolerances ?? soundTolerances;
  const wheel = drawWheel(draw, kind, positions, missing, tolerances, isRing);
  const rigSeed = draw.seed();
  const field = fieldOf(wheel, rigSeed);
  const sensor = drawSensor(draw, word, kind, field);
  const gearRatio = draw.chance(0.15) ? draw.pick([0.5, 2, 2.5, 3]) : 1;
  const turnsPerS = toothHz / positions;
  const rateHz = rateFor(draw, toothHz, sensing, wants);
  const noiseV = sensor.rmsV / 10 ** (draw.uniform(...(wants.snrDb ?? [25, 45])) / 20);
  const channels = drawChannels(draw, sensing, wants, sensor, noiseV);
  return {
    sensing,
    wheel,
    field,
    sensor,
    toothHz,
    turnsPerS,
    rpm: (60 * turnsPerS) / gearRatio,
    gearRatio,
    rateHz,
    noiseV,
    rigSeed,
    still: {
      rateHz,
      clockPpm: draw.uniform(-40, 40),
      gearRatio,
      wheel: wheel.wheel,
      gapMm: wheel.gapMm,
      supply: { nominalV: sensor.supplyV },
      channels,
      ...(wants.index && {
        index: {
          atTurns: draw.uniform(0, 1),
          widthTurns: Math.min(0.2, 0.9 / positions),
          fieldMt: indexSensorFor(sensor).fieldMt,
        },
      }),
      adc: drawAdc(draw, sensor.supplyV, wants.adc),
    },
    settings: drawSettings(draw, {
      toothHz,
      rateHz,
      sensor,
      isPlain: kind !== 'magnets' && word === 'linear',
      mayBeFixed: !(wants.index && word === 'linear'),
    }),
  };
}

export function benchOf(
  machine: Machine,
  motion: MotionSpec,
  more: {
    faults?: RigSpec['faults'];
    spec?: Partial<RigSpec>;
    setup?: Partial<RigSetup>;
    settings?: Partial<Settings>;
  } = {},
): Bench {
  const spec: RigSpec = { ...machine.still, motion, faults: more.faults ?? [], ...more.spec };
  const words = { name: 'Stand', sensing: machine.sensing, expectedDirection: null, ratedRpm: null } as const;
  const told = setupOf(spec, words, machine.sensor.supplyV);
  const setup: RigSetup = {
    ...told,
    wheel: { ...told.wheel, widthClasses: told.wheel.widthClasses ?? null },
    ...more.setup,
  };
  return { spec, setup, settings: { ...machine.settings, ...more.settings }, rigSeed: machine.rigSeed };
}

function drawMake(
  draw: Draw,
  sensing: Sensing,
  missing: number,
  wants: Wants,
): { word: SensorWord; kind: WheelKind } {
  const words = wants.sensors ?? (['linear', 'linear', 'latch', 'switch'] as const);
  const kinds = wants.wheels ?? (['toothed', 'pole-ring', 'magnets'] as const);
  for (;;) {
    const word = sensing === 'width-coded' ? 'pulse' : draw.pick(words);
    const kind = draw.pick(sensing === 'width-coded' ? (['toothed'] as const) : kinds);
    if (!fits[word].includes(kind)) continue;
    // Narrow pulses do not overlap, so that they make no ring of states.
    if ((sensing === 'quadrature' || sensing === 'three-hall') && kind === 'magnets') continue;
    if (missing > 0 && kind !== 'toothed') continue;
    return { word, kind };
  }
}

function drawSpeed(draw: Draw, kind: WheelKind, missing: number, word: SensorWord, wants: Wants) {
  const [slowest, fastest] = wants.turnsPerS ?? [0.2, 80];
  for (;;) {
    const positions = drawPositions(draw, kind, wants.positions ?? [1, 80]);
    const toothHz = draw.log(...(wants.toothHz ?? [8, 300]));
    const turnsPerS = toothHz / positions;
    if (turnsPerS < slowest || turnsPerS > fastest) continue;
    if (missing > 0 && positions < 12) continue;
    // The widest pulse of a coded sensor must end well before the next tooth.
    if (word === 'pulse' && toothHz > 350) continue;
    return { positions, toothHz };
  }
}

/** Ends of what the converter can tell, V; those of the sensor where it has none. */
export function rangeOf({ still, sensor }: Machine): { lowV: number; highV: number } {
  const { adc } = still;
  if (adc.kind === 'volts') return { lowV: 0.05 * sensor.supplyV, highV: 0.95 * sensor.supplyV };
  const { minCode, maxCode } = codeRange(adc);
  return {
    lowV: (minCode - adc.codeOffset) * adc.voltsPerCode,
    highV: (maxCode - adc.codeOffset) * adc.voltsPerCode,
  };
}
