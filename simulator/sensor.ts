/**
 * From field to volts on the wire. A linear sensor is V = supply/2-like quiescent + sensitivity * B, both in
 * proportion to the supply where ratiometric, slowed by one pole and limited by its rails. Switching and pulse sensors
 * drive a line (see there). What faults add comes on top.
 */
import { isWithinEvent } from '@/simulator/disturbance';
import type { ChannelEffects } from '@/simulator/fault-effects';
import { createPulse, type PulseSensor } from '@/simulator/pulse-sensor';
import { normalAt } from '@/simulator/random';
import { createSwitching, type SensorCore, type SwitchingSensor } from '@/simulator/switching-sensor';

export type LinearSensor = {
  kind: 'linear';
  quiescentV: number;
  sensitivityMvPerMt: number;
  ratiometric?: boolean;
  bandwidthHz?: number;
  lowRailV: number;
  highRailV: number;
};
export type { PulseSensor, SwitchingSensor };
export type SensorSpec = LinearSensor | SwitchingSensor | PulseSensor;

export type Electronics = {
  noiseRmsV: number;
  humV?: number;
  humHz?: number;
  /** Slow wander of the offset: amplitude and period. */
  wanderV?: number;
  wanderPeriodS?: number;
};

export type Sensor = {
  /** Volts on the wire at sample `index`; to be called once a sample, in order. `quarterMt`: for a pulse sensor. */
  step(
    fieldMt: number,
    index: number,
    tS: number,
    supplyRatio: number,
    effects: ChannelEffects,
    quarterMt?: number,
  ): number;
};

/** `rigSeed`: of what all channels have in common. */
export function createSensor(
  spec: SensorSpec,
  electronics: Electronics,
  stepS: number,
  seed: number,
  rigSeed = seed,
): Sensor {
  const core = coreOf(spec, stepS, seed);
  const { low, high, mirrorV } = rangeOf(spec);
  const wander = (2 * Math.PI) / (electronics.wanderPeriodS ?? 600);
  const ownRms = electronics.noiseRmsV;
  const humRate = 2 * Math.PI * (electronics.humHz ?? 50);
  let held = NaN;
  return {
    step(fieldMt, index, tS, supplyRatio, effects, quarterMt = 0) {
      let volts = core(fieldMt, index, supplyRatio, effects, quarterMt);
      if (effects.inverted) volts = mirrorV - volts;
      if (effects.deadV !== null) volts = effects.deadV;
      volts += effects.offsetV;
      if (electronics.wanderV) volts += electronics.wanderV * Math.sin(wander * tS);
      // The sensor's own noise stops at its rails with the signal; what the cable picks up comes on top.
      const rms = effects.noiseV > 0 ? Math.hypot(ownRms, effects.noiseV) : ownRms;
      if (rms > 0) volts += rms * normalAt(seed, index);
      if (effects.ringShare === 0)
        volts = Math.min(Math.max(volts, Math.max(low, effects.lowV)), Math.min(high, effects.highV));
      if (electronics.humV) volts += electronics.humV * Math.sin(humRate * tS);
      if (effects.humV) volts += humOf(effects, tS);
      if (effects.spikesPerS && isWithinEvent(tS, effects.spikesPerS, effects.spikeS, seed ^ 0x1f83d9ab))
        volts += effects.spikeV;
      if (effects.freezesPerS && !Number.isNaN(held)) {
        const own = effects.freezeAll ? rigSeed : seed;
        if (isWithinEvent(tS, effects.freezesPerS, effects.freezeS, own ^ 0x5be0cd19)) return held;
      }
      held = volts;
      return volts;
    },
  };
}

function coreOf(spec: SensorSpec, stepS: number, seed: number): SensorCore {
  switch (spec.kind) {
    case 'linear':
      return createLinear(spec, stepS);
    case 'pulse':
      return createPulse(spec, stepS);
    default:
      return createSwitching(spec, stepS, seed);
  }
}

/** Where the output ends, and twice the voltage about which an inverted line is turned. */
function rangeOf(spec: SensorSpec): { low: number; high: number; mirrorV: number } {
  switch (spec.kind) {
    case 'linear':
      return { low: spec.lowRailV, high: spec.highRailV, mirrorV: 2 * spec.quiescentV };
    case 'pulse':
      return { low: 0, high: Infinity, mirrorV: spec.lowV + spec.highV };
    default:
      return { low: 0, high: spec.pullUpV, mirrorV: spec.lowV + spec.pullUpV };
  }
}

function humOf({ humV, humHz, humThird }: ChannelEffects, tS: number): number {
  const angle = 2 * Math.PI * humHz * tS;
  return humV * (Math.sin(angle) + (humThird ? humThird * Math.sin(3 * angle) : 0));
}

function createLinear(spec: LinearSensor, stepS: number): SensorCore {
  const follow = spec.bandwidthHz ? 1 - Math.exp(-2 * Math.PI * spec.bandwidthHz * stepS) : 1;
  let held = NaN;
  return (fieldMt, _index, supplyRatio) => {
    const scale = spec.ratiometric ? supplyRatio : 1;
    const target = scale * (spec.quiescentV + 0.001 * spec.sensitivityMvPerMt * fieldMt);
    held = Number.isNaN(held) ? target : held + follow * (target - held);
    return held;
  };
}
