/** A whole rig: motion, wheel, sensors, faults and converter, sample by sample, with the truth beside it. */
import { createConverter, createWireArray, type AdcSpec, type WireArray } from '@/simulator/adc';
import type { Fault } from '@/simulator/faults';
import { createMotion, type MotionSpec } from '@/simulator/motion';
import { createRun, loopTime } from '@/simulator/rig-run';
import type { Electronics, SensorSpec } from '@/simulator/sensor';
import { createTruth, type Truth } from '@/simulator/truth';
import { createWheel, type WheelSpec } from '@/simulator/wheel';

export type ChannelSpec = {
  name: string;
  /** How far on the sensor stands, in degrees of one position; B of a quadrature pair: 90; V and W of three: 120, 240. */
  placeDeg: number;
  /** Turned round: the other pole, or a tooth seen as a slot. */
  inverted?: boolean;
  /** What it looks at: the wheel's teeth, or the mark that comes once a turn. */
  track?: 'teeth' | 'index';
  /** Where not given: A and B, or U, V and W, in their order; Z before the index mark. */
  role?: 'A' | 'B' | 'Z' | 'U' | 'V' | 'W' | 'aux';
  /** A field that stands beside the wheel's own. */
  baselineMt?: number;
  /** A coil's swing grows with the speed: the field counts as given at this speed of the wheel. */
  swingRpm?: number;
  sensor: SensorSpec;
  electronics: Electronics;
};
/** A mark of its own on the wheel: `fieldMt` at its middle, felt over `widthTurns`. */
export type IndexMark = { atTurns: number; widthTurns: number; fieldMt: number };
export type RigSpec = {
  rateHz: number;
  /** How fast the board's clock runs: its rate is really rateHz (1 + clockPpm 1e-6). */
  clockPpm?: number;
  motion: MotionSpec;
  /** Turns of the wheel for one of the shaft. */
  gearRatio?: number;
  wheel: WheelSpec;
  index?: IndexMark;
  gapMm: number;
  /** A temperature that swings: field in percent per kelvin, and what the sensor's own drift is worth in mT per kelvin. */
  temperature?: { percentPerK: number; swingK: number; periodS: number; offsetMtPerK?: number };
  supply?: { nominalV: number; rippleV?: number; rippleHz?: number };
  channels: ChannelSpec[];
  adc: AdcSpec;
  faults: Fault[];
  /** Faults repeat with this period. */
  loopS?: number;
};

export type Rig = {
  spec: RigSpec;
  channels: string[];
  /**
   * Samples [startIndex, startIndex + count) of every channel, in the order of `channels`. The same whatever was asked
   * before: sensors have a memory, so the model runs through what lies between, and begins anew to go back.
   */
  block(startIndex: number, count: number): WireArray[];
  truth: Truth;
  /** True time of a sample, s. */
  timeOf(index: number): number;
  /** Faults of these kinds that are on at that time. */
  faultsAt(tS: number): Fault[];
};

export function createRig(spec: RigSpec, seed: number): Rig {
  const motion = createMotion(spec.motion);
  const stepS = 1 / (spec.rateHz * (1 + (spec.clockPpm ?? 0) * 1e-6));
  const convert = createConverter(spec.adc);
  const volts = new Float64Array(spec.channels.length);
  let run = createRun(spec, seed, stepS, motion.turnsAt);
  let next = 0;

  function block(startIndex: number, count: number): WireArray[] {
    if (startIndex < next) {
      run = createRun(spec, seed, stepS, motion.turnsAt);
      next = 0;
    }
    const arrays = spec.channels.map(() => createWireArray(spec.adc, count));
    for (; next < startIndex; next += 1) run(next, volts);
    for (let i = 0; i < count; i += 1, next += 1) {
      run(next, volts);
      for (let c = 0; c < arrays.length; c += 1) (arrays[c] as WireArray)[i] = convert(volts[c] as number);
    }
    return arrays;
  }

  return {
    spec,
    channels: spec.channels.map((channel) => channel.name),
    block,
    truth: createTruth(
      motion,
      createWheel(spec.wheel, seed, spec.gapMm),
      spec.gearRatio ?? 1,
      spec.wheel.runOutMm,
    ),
    timeOf: (index) => index * stepS,
    faultsAt: (tS) => {
      const t = loopTime(spec, tS);
      return spec.faults.filter((fault) => t >= fault.beginS && t < fault.endS);
    },
  };
}
