/** Sensors that fit a wheel: a sensible share of the supply for a linear one, points well inside the field for others. */
import type { Electronics, LinearSensor, SensorSpec } from '@/simulator/sensor';
import type { Draw } from '@/tests/accuracy/findings/draw';
import type { Field, WheelKind } from '@/tests/accuracy/findings/wheels';

export type SensorWord = 'linear' | 'latch' | 'switch' | 'pulse';
export type DrawnSensor = {
  sensor: SensorSpec;
  /** Before the sensor beside the wheel's field, mT. */
  baselineMt: number;
  /** It faces the other pole. */
  inverted: boolean;
  supplyV: number;
  /** Peak to peak on the wire, V, and the rms of it without its mean. */
  swingV: number;
  rmsV: number;
  /** The band that a person would type. */
  lowV: number;
  highV: number;
};

export function drawSensor(draw: Draw, word: SensorWord, kind: WheelKind, field: Field): DrawnSensor {
  const supplyV = draw.pick([3.3, 5]);
  return word === 'linear'
    ? drawLinear(draw, kind, field, supplyV)
    : drawSwitching(draw, word, field, supplyV);
}

function drawLinear(draw: Draw, kind: WheelKind, field: Field, supplyV: number): DrawnSensor {
  const spanMt = field.highMt - field.lowMt;
  const swingV = supplyV * (kind === 'magnets' ? draw.uniform(0.18, 0.36) : draw.uniform(0.2, 0.55));
  const sensitivityMvPerMt = (1000 * swingV) / spanMt;
  // A standing field moves the signal by up to an eighth of the supply.
  const baselineMt =
    kind === 'toothed' && draw.chance(0.5)
      ? (draw.sign() * draw.uniform(0, 0.12) * supplyV * 1000) / sensitivityMvPerMt
      : 0;
  const sensor: LinearSensor = {
    kind: 'linear',
    quiescentV: supplyV / 2,
    sensitivityMvPerMt,
    ratiometric: draw.chance(0.7),
    bandwidthHz: draw.uniform(15_000, 30_000),
    lowRailV: 0.05 * supplyV,
    highRailV: 0.95 * supplyV,
  };
  const inverted = draw.chance(0.3);
  const volts = (mt: number) =>
    sensor.quiescentV + 0.001 * sensitivityMvPerMt * ((inverted ? -mt : mt) + baselineMt);
  return {
    sensor,
    baselineMt,
    inverted,
    supplyV,
    swingV,
    rmsV: 0.001 * sensitivityMvPerMt * field.rmsMt,
    lowV: volts(inverted ? field.highMt : field.lowMt),
    highV: volts(inverted ? field.lowMt : field.highMt),
  };
}

function drawSwitching(
  draw: Draw,
  word: Exclude<SensorWord, 'linear'>,
  field: Field,
  supplyV: number,
): DrawnSensor {
  const half = (field.highMt - field.lowMt) / 2;
  const middle = (field.highMt + field.lowMt) / 2;
  const width = draw.uniform(0.15, 0.4) * half;
  const off = draw.uniform(-0.06, 0.06) * half;
  // A latch meets both poles; the others need a field that does not change its sign.
  const baselineMt = word === 'latch' ? 0 : Math.max(0, 0.2 * half - field.lowMt);
  const points = {
    operateMt: middle + off + width + baselineMt,
    releaseMt: middle + off - width + baselineMt,
  };
  const common = { baselineMt, supplyV, inverted: false };
  const lowV = draw.uniform(0.02, 0.2);
  if (word === 'pulse') {
    const shortS = 0.0002;
    const sensor: SensorSpec = {
      kind: 'pulse',
      ...points,
      weakBelowMt: 0.3 * half,
      widths: { weakS: shortS, forwardS: 2 * shortS, reverseS: 4 * shortS },
      lowV: 0.3 * supplyV,
      highV: 0.6 * supplyV,
      lineS: 3e-6,
    };
    const swingV = 0.3 * supplyV;
    const { lowV: idleV, highV } = sensor;
    return { ...common, sensor, swingV, rmsV: swingV / 2, lowV: idleV, highV };
  }
  const sensor: SensorSpec = {
    kind: word,
    ...points,
    pullUpV: supplyV,
    pullUpOhm: draw.log(1000, 4700),
    lineFarad: draw.log(2e-10, 2e-9),
    lowV,
  };
  const swingV = supplyV - lowV;
  return { ...common, sensor, swingV, rmsV: swingV / 2, lowV, highV: supplyV };
}

/** Noise by the ratio of the signal's rms to its own, and what else a sound channel has. */
export function drawElectronics(draw: Draw, { rmsV, swingV }: DrawnSensor, snrDb: number): Electronics {
  return {
    noiseRmsV: rmsV / 10 ** (snrDb / 20),
    ...(draw.chance(0.3) && { humV: swingV * draw.uniform(0, 0.006), humHz: draw.pick([50, 60]) }),
    ...(draw.chance(0.5) && { wanderV: swingV * draw.uniform(0, 0.02), wanderPeriodS: draw.log(60, 600) }),
  };
}

/** Before the index mark: the same make, or a switch; with the field that the mark should have, mT. */
export function indexSensorFor({ sensor, supplyV, swingV }: DrawnSensor): {
  sensor: SensorSpec;
  fieldMt: number;
} {
  if (sensor.kind === 'linear') {
    const reachV = Math.min(swingV, 0.38 * supplyV);
    return { sensor, fieldMt: (1000 * reachV) / sensor.sensitivityMvPerMt };
  }
  const fieldMt = 40;
  const points = { operateMt: 0.55 * fieldMt, releaseMt: 0.35 * fieldMt };
  if (sensor.kind === 'pulse') throw new Error('a width-coded rig has no index');
  return { sensor: { ...sensor, kind: 'switch', ...points }, fieldMt };
}
