/**
 * From field to volts on the wire. A linear sensor is V = supply/2-like quiescent + sensitivity * B, both in
 * proportion to the supply where ratiometric, slowed by one pole and limited by its rails. A switching sensor is a
 * comparator with an operate and a release point on an open drain: slow rise through the pull-up (R C), fast fall.
 */
import type { ChannelEffects } from '@/simulator/faults';
import { normalAt, uniformAt } from '@/simulator/random';

export type LinearSensor = {
  kind: 'linear';
  quiescentV: number;
  sensitivityMvPerMt: number;
  ratiometric?: boolean;
  bandwidthHz?: number;
  lowRailV: number;
  highRailV: number;
};
export type SwitchingSensor = {
  kind: 'switch' | 'latch' | 'omnipolar';
  operateMt: number;
  releaseMt: number;
  /** The line is pulled up to this when the output is open (no field: open). */
  pullUpV: number;
  pullUpOhm: number;
  lineFarad: number;
  /** Level of the closed output. */
  lowV: number;
};
export type SensorSpec = LinearSensor | SwitchingSensor;

export type Electronics = {
  noiseRmsV: number;
  humV?: number;
  humHz?: number;
  /** Slow wander of the offset: amplitude and period. */
  wanderV?: number;
  wanderPeriodS?: number;
};

export type Sensor = {
  /** Volts on the wire at sample `index`; to be called once a sample, in order. */
  step(fieldMt: number, index: number, tS: number, supplyRatio: number, effects: ChannelEffects): number;
};

export function createSensor(
  spec: SensorSpec,
  electronics: Electronics,
  stepS: number,
  seed: number,
): Sensor {
  const core = spec.kind === 'linear' ? createLinear(spec, stepS) : createSwitching(spec, stepS, seed);
  const low = spec.kind === 'linear' ? spec.lowRailV : 0;
  const high = spec.kind === 'linear' ? spec.highRailV : spec.pullUpV;
  const wander = (2 * Math.PI) / (electronics.wanderPeriodS ?? 600);
  const ownRms = electronics.noiseRmsV;
  const humRate = 2 * Math.PI * (electronics.humHz ?? 50);
  return {
    step(fieldMt, index, tS, supplyRatio, effects) {
      let volts = core(fieldMt, index, supplyRatio, effects);
      if (effects.deadV !== null) volts = effects.deadV;
      volts += effects.offsetV;
      if (electronics.wanderV) volts += electronics.wanderV * Math.sin(wander * tS);
      // The sensor's own noise stops at its rails with the signal; what the cable picks up comes on top.
      const rms = effects.noiseV > 0 ? Math.hypot(ownRms, effects.noiseV) : ownRms;
      if (rms > 0) volts += rms * normalAt(seed, index);
      volts = Math.min(Math.max(volts, Math.max(low, effects.lowV)), Math.min(high, effects.highV));
      if (electronics.humV) volts += electronics.humV * Math.sin(humRate * tS);
      if (effects.humV) volts += effects.humV * Math.sin(2 * Math.PI * effects.humHz * tS);
      return volts;
    },
  };
}

type Core = (fieldMt: number, index: number, supplyRatio: number, effects: ChannelEffects) => number;

function createLinear(spec: LinearSensor, stepS: number): Core {
  const follow = spec.bandwidthHz ? 1 - Math.exp(-2 * Math.PI * spec.bandwidthHz * stepS) : 1;
  let held = NaN;
  return (fieldMt, _index, supplyRatio) => {
    const scale = spec.ratiometric ? supplyRatio : 1;
    const target = scale * (spec.quiescentV + 0.001 * spec.sensitivityMvPerMt * fieldMt);
    held = Number.isNaN(held) ? target : held + follow * (target - held);
    return held;
  };
}

function createSwitching(spec: SwitchingSensor, stepS: number, seed: number): Core {
  const riseTau = spec.pullUpOhm * spec.lineFarad;
  const fallTau = riseTau / 50;
  let closed = false;
  let before = NaN;
  let line = spec.pullUpV;
  let sinceS = Infinity;
  return (fieldMt, index, _supplyRatio, effects) => {
    const field = spec.kind === 'omnipolar' ? Math.abs(fieldMt) : fieldMt;
    const point = closed ? spec.releaseMt : spec.operateMt;
    const crosses = closed ? field < point : field > point;
    sinceS += stepS;
    if (crosses) {
      // Where between the two samples the point was passed, so that the edge is not tied to the sample clock.
      const moved = field - before;
      const late =
        Number.isNaN(before) || moved === 0 ? 0 : Math.min(1, Math.max(0, (field - point) / moved));
      line = settle(line, closed, (1 - late) * stepS);
      closed = !closed;
      line = settle(line, closed, late * stepS);
      sinceS = late * stepS;
    } else {
      const chatters = sinceS < effects.bounceS && uniformAt(seed ^ 0x2545f491, index) < 0.5;
      line = settle(line, chatters ? !closed : closed, stepS);
    }
    before = field;
    return line;
  };

  function settle(volts: number, isClosed: boolean, forS: number): number {
    const target = isClosed ? spec.lowV : spec.pullUpV;
    return target + (volts - target) * Math.exp(-forS / (isClosed ? fallTau : riseTau));
  }
}
