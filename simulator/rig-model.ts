/** A whole rig: motion, wheel, sensors, faults and converter, sample by sample, with the truth beside it. */
import { createConverter, createWireArray, type AdcSpec, type WireArray } from '@/simulator/adc';
import {
  applyFault,
  noChannelEffects,
  noRigEffects,
  type ChannelEffects,
  type Fault,
} from '@/simulator/faults';
import { createMotion, type MotionSpec } from '@/simulator/motion';
import { subSeed } from '@/simulator/random';
import { createSensor, type Electronics, type SensorSpec } from '@/simulator/sensor';
import { createTruth, type Truth } from '@/simulator/truth';
import { createWheel, type WheelSpec } from '@/simulator/wheel';

export type ChannelSpec = {
  name: string;
  /** How far on the sensor stands, in degrees of one position; B of a quadrature pair: 90. */
  placeDeg: number;
  /** Turned round: the other pole, or a tooth seen as a slot. */
  inverted?: boolean;
  sensor: SensorSpec;
  electronics: Electronics;
};
export type RigSpec = {
  rateHz: number;
  /** How fast the board's clock runs: its rate is really rateHz (1 + clockPpm 1e-6). */
  clockPpm?: number;
  motion: MotionSpec;
  /** Turns of the wheel for one of the shaft. */
  gearRatio?: number;
  wheel: WheelSpec;
  gapMm: number;
  /** Field against temperature: percent per kelvin, and a temperature that swings. */
  temperature?: { percentPerK: number; swingK: number; periodS: number };
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

/** Faults change at most this often, on sample numbers that do not depend on the blocks. */
const tickSamples = 16;

export function createRig(spec: RigSpec, seed: number): Rig {
  const motion = createMotion(spec.motion);
  const gear = spec.gearRatio ?? 1;
  const stepS = 1 / (spec.rateHz * (1 + (spec.clockPpm ?? 0) * 1e-6));
  const convert = createConverter(spec.adc);
  let run = createRun(spec, seed, stepS, motion.turnsAt, gear);
  let next = 0;

  function block(startIndex: number, count: number): WireArray[] {
    if (startIndex < next) {
      run = createRun(spec, seed, stepS, motion.turnsAt, gear);
      next = 0;
    }
    const arrays = spec.channels.map(() => createWireArray(spec.adc, count));
    const volts = new Float64Array(spec.channels.length);
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
    truth: createTruth(motion, createWheel(spec.wheel, seed, spec.gapMm), gear),
    timeOf: (index) => index * stepS,
    faultsAt: (tS) => {
      const t = loopTime(spec, tS);
      return spec.faults.filter((fault) => t >= fault.beginS && t < fault.endS);
    },
  };
}

function loopTime(spec: RigSpec, tS: number): number {
  return spec.loopS ? tS - Math.floor(tS / spec.loopS) * spec.loopS : tS;
}

type Run = (index: number, volts: Float64Array) => void;

function createRun(
  spec: RigSpec,
  seed: number,
  stepS: number,
  turnsAt: (tS: number) => number,
  gear: number,
): Run {
  const wheel = createWheel(spec.wheel, seed, spec.gapMm);
  const strengths = wheel.strengths.slice();
  const runOutMm = spec.wheel.runOutMm ?? 0;
  const effects = new Map<string, ChannelEffects>();
  const channels = spec.channels.map((channel) => {
    const sensor = createSensor(channel.sensor, channel.electronics, stepS, subSeed(seed, channel.name));
    return { sensor, sign: channel.inverted ? -1 : 1, placeDeg: channel.placeDeg, name: channel.name };
  });
  const perChannel = channels.map(({ name }) => {
    const own = noChannelEffects();
    effects.set(name, own);
    return own;
  });
  const rig = noRigEffects();
  const supplyV = spec.supply?.nominalV ?? 1;
  let warmth = 1;

  let isAffected = false;

  function refresh(tS: number): void {
    const t = loopTime(spec, tS);
    const isAnyOn = spec.faults.some((fault) => t >= fault.beginS && t < fault.endS);
    if (isAffected || isAnyOn) {
      Object.assign(rig, noRigEffects());
      for (const own of perChannel) Object.assign(own, noChannelEffects());
      wheel.strengths.set(strengths);
      for (const fault of spec.faults) applyFault(fault, t, rig, effects, wheel.strengths);
    }
    isAffected = isAnyOn;
    const heat = spec.temperature;
    if (heat)
      warmth = 1 + 0.01 * heat.percentPerK * heat.swingK * Math.sin((2 * Math.PI * tS) / heat.periodS);
  }

  return (index, volts) => {
    const tS = index * stepS;
    if (index % tickSamples === 0) refresh(tS);
    const turns = turnsAt(tS) * gear;
    let gapMm = spec.gapMm + rig.gapAddMm;
    if (runOutMm) gapMm += runOutMm * Math.cos(2 * Math.PI * turns);
    let supply = 1;
    if (spec.supply?.rippleV) {
      supply += (spec.supply.rippleV / supplyV) * Math.sin(2 * Math.PI * (spec.supply.rippleHz ?? 100) * tS);
    }
    if (rig.rippleV) supply += (rig.rippleV / supplyV) * Math.sin(2 * Math.PI * rig.rippleHz * tS);
    for (let c = 0; c < channels.length; c += 1) {
      const { sensor, sign, placeDeg } = channels[c] as (typeof channels)[number];
      const own = perChannel[c] as ChannelEffects;
      const place = (placeDeg + own.phaseDeg) / 360 / wheel.positions;
      const fieldMt = sign * warmth * wheel.fieldMt(turns - place, gapMm);
      volts[c] = sensor.step(fieldMt, index, tS, supply, own);
    }
  };
}
