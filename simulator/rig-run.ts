/** The rig in motion: volts of every channel, sample by sample, with the faults that are on. */
import { applyFault, noChannelEffects, noRigEffects, type ChannelEffects } from '@/simulator/fault-effects';
import type { ChannelSpec, IndexMark, RigSpec } from '@/simulator/rig-model';
import { subSeed } from '@/simulator/random';
import { createSensor } from '@/simulator/sensor';
import { createWheel } from '@/simulator/wheel';

/** Faults change at most this often, on sample numbers that do not depend on the blocks. */
const tickSamples = 16;

/** To be called once a sample, in order. */
export type Run = (index: number, volts: Float64Array) => void;

/** `turnsAt`: turns of the shaft by true time. */
export function createRun(spec: RigSpec, seed: number, stepS: number, turnsAt: (tS: number) => number): Run {
  const gear = spec.gearRatio ?? 1;
  const wheel = createWheel(spec.wheel, seed, spec.gapMm);
  const n = wheel.positions;
  const healthy = { strengths: wheel.strengths.slice(), places: wheel.places.slice() };
  const channels = spec.channels.map((channel) => createChannel(channel, stepS, seed));
  const effects = new Map(channels.map(({ name, own }) => [name, own]));
  const rig = noRigEffects();
  const supplyV = spec.supply?.nominalV ?? 1;
  const heat = spec.temperature;
  const anyCoil = channels.some(({ swingRpm }) => swingRpm > 0);
  let warmth = 1;
  let heatMt = 0;
  let isAffected = false;
  let turnsBefore = NaN;

  function refresh(tS: number): void {
    const t = loopTime(spec, tS);
    const isAnyOn = spec.faults.some((fault) => t >= fault.beginS && t < fault.endS);
    if (isAffected || isAnyOn) {
      Object.assign(rig, noRigEffects());
      for (const { own } of channels) Object.assign(own, noChannelEffects());
      wheel.strengths.set(healthy.strengths);
      wheel.places.set(healthy.places);
      for (const fault of spec.faults) applyFault(fault, t, rig, effects, wheel);
      wheel.burrs = rig.burrs;
    }
    isAffected = isAnyOn;
    if (!heat) return;
    const kelvin = heat.swingK * Math.sin((2 * Math.PI * tS) / heat.periodS);
    warmth = 1 + 0.01 * heat.percentPerK * kelvin;
    heatMt = (heat.offsetMtPerK ?? 0) * kelvin;
  }

  function supplyRatio(tS: number): number {
    let ratio = 1;
    const { supply } = spec;
    if (supply?.rippleV)
      ratio += (supply.rippleV / supplyV) * Math.sin(2 * Math.PI * (supply.rippleHz ?? 100) * tS);
    if (rig.rippleV) ratio += (rig.rippleV / supplyV) * Math.sin(2 * Math.PI * rig.rippleHz * tS);
    return ratio;
  }

  function shakenTurns(tS: number): number {
    const angle = 2 * Math.PI * rig.shakeHz * tS;
    return (rig.shakePositions / n) * ((Math.sin(angle) + 0.35 * Math.sin(1.618 * angle)) / 1.35);
  }

  return (index, volts) => {
    const tS = index * stepS;
    if (index % tickSamples === 0) refresh(tS);
    let turns = turnsAt(tS) * gear;
    if (rig.shakePositions) turns += shakenTurns(tS);
    let gapMm = spec.gapMm + rig.gapAddMm;
    const runOutMm = (spec.wheel.runOutMm ?? 0) + rig.runOutAddMm;
    let seen = turns;
    if (runOutMm) {
      gapMm += runOutMm * Math.cos(2 * Math.PI * turns);
      seen += wheel.runOutTurns(turns, runOutMm);
    }
    const rpm = anyCoil && !Number.isNaN(turnsBefore) ? (60 * Math.abs(turns - turnsBefore)) / stepS : 0;
    turnsBefore = turns;
    const supply = supplyRatio(tS);
    const magnet = warmth * rig.magnet;
    for (let c = 0; c < channels.length; c += 1) {
      const channel = channels[c] as (typeof channels)[number];
      const { own } = channel;
      const place = (channel.placeDeg + own.phaseDeg) / 360 / n;
      let field =
        channel.isIndex && spec.index
          ? indexMt(spec.index, seen - place)
          : wheel.fieldMt(seen - place, gapMm) * magnet;
      if (channel.swingRpm > 0) field *= rpm / channel.swingRpm;
      const quarter = channel.isPulse ? wheel.fieldMt(seen - place - 0.25 / n, gapMm) * magnet : 0;
      const add = channel.baselineMt + heatMt;
      volts[c] = channel.sensor.step(
        channel.sign * field + add,
        index,
        tS,
        supply,
        own,
        channel.sign * quarter + add,
      );
    }
    if (rig.swapped) swap(volts, rig.swapped);
  };

  function swap(volts: Float64Array, names: readonly [string, string]): void {
    const a = channels.findIndex(({ name }) => name === names[0]);
    const b = channels.findIndex(({ name }) => name === names[1]);
    const voltsOfA = volts[a] as number;
    volts[a] = volts[b] as number;
    volts[b] = voltsOfA;
  }
}

function createChannel(spec: ChannelSpec, stepS: number, seed: number) {
  const own: ChannelEffects = noChannelEffects();
  return {
    name: spec.name,
    own,
    sensor: createSensor(spec.sensor, spec.electronics, stepS, subSeed(seed, spec.name), seed),
    sign: spec.inverted ? -1 : 1,
    placeDeg: spec.placeDeg,
    isIndex: spec.track === 'index',
    isPulse: spec.sensor.kind === 'pulse',
    baselineMt: spec.baselineMt ?? 0,
    swingRpm: spec.swingRpm ?? 0,
  };
}

/** One mark a turn, felt as half a cosine either way. */
function indexMt({ atTurns, widthTurns, fieldMt }: IndexMark, turns: number): number {
  const off = turns - atTurns - Math.round(turns - atTurns);
  const distance = Math.abs(off) / (widthTurns / 2);
  return distance < 1 ? fieldMt * (0.5 + 0.5 * Math.cos(Math.PI * distance)) : 0;
}

export function loopTime(spec: Pick<RigSpec, 'loopS'>, tS: number): number {
  return spec.loopS ? tS - Math.floor(tS / spec.loopS) * spec.loopS : tS;
}
