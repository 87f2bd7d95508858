/** The wheel as a field source: what the sensor sees at a wheel angle and a gap. */
import {
  axialFieldMt,
  createMagnetProfile,
  slideByFieldMt,
  type CylinderMagnet,
} from '@/simulator/cylinder-field';
import { createPoleField, gapDecay, type PoleRing } from '@/simulator/pole-ring-field';
import { normalAt, subSeed } from '@/simulator/random';

type Common = {
  /** Places on the wheel, the missing ones included; pole pairs of a pole ring. */
  positions: number;
  /** Position numbers at which nothing stands. */
  missing?: number[];
  /** Standard deviation of the place of a tooth, share of the pitch, drawn from the seed. */
  pitchErrorRms?: number;
  /** Given errors by position, share of the pitch; added to the drawn ones. */
  pitchErrors?: Record<number, number>;
  /** Given strengths by position, 1 = as designed. */
  strengths?: Record<number, number>;
  /** How far the wheel's centre is off its axis: the gap swings by so much each way, once a turn. */
  runOutMm?: number;
};

/** Iron teeth before a sensor with a magnet behind it. */
export type ToothedWheel = Common & {
  kind: 'toothed';
  pitchMm: number;
  /** Half the change of field from slot to tooth at gap 0; falls by exp(-2 pi z / pitch). */
  modulationMt: number;
  /** Share of the pitch over which a tooth is felt, up to 1 (a pure sine). */
  toothWidth?: number;
};
export type PoleWheel = Common & PoleRing & { kind: 'pole-ring' };
/** Cylinder magnets set in the rim, all with the same pole outward. */
export type MagnetWheel = Common & CylinderMagnet & { kind: 'magnets'; pitchMm: number };
export type WheelSpec = ToothedWheel | PoleWheel | MagnetWheel;

export type Wheel = {
  positions: number;
  /** Strength of each position; faults change it. */
  strengths: Float64Array;
  /** Where, in positions (0 .. positions), the field of position k rises and falls through its middle. */
  riseAt(position: number): number;
  fallAt(position: number): number;
  present(position: number): boolean;
  /** Field at the sensor, mT. `turns` of the wheel, less the sensor's own place. */
  fieldMt(turns: number, gapMm: number): number;
};

/** `gapMm`: the designed gap, where the middle of a magnet's field is taken. */
export function createWheel(spec: WheelSpec, seed: number, gapMm: number): Wheel {
  const n = spec.positions;
  const gone = new Set(spec.missing ?? []);
  const place = new Float64Array(n);
  const strengths = new Float64Array(n);
  const wheelSeed = subSeed(seed, 'wheel');
  for (let k = 0; k < n; k += 1) {
    place[k] = (spec.pitchErrorRms ?? 0) * normalAt(wheelSeed, k) + (spec.pitchErrors?.[k] ?? 0);
    strengths[k] = gone.has(k) ? 0 : (spec.strengths?.[k] ?? 1);
  }
  const shape = shapeOf(spec, { n, place, strengths }, gapMm);
  return {
    positions: n,
    strengths,
    riseAt: shape.riseAt,
    fallAt: shape.fallAt,
    present: (k) => !gone.has(k),
    fieldMt: (turns, gap) => shape.field((turns - Math.floor(turns)) * n, gap),
  };
}

type Teeth = { n: number; place: Float64Array; strengths: Float64Array };
type Shape = {
  riseAt(position: number): number;
  fallAt(position: number): number;
  field(positions: number, gapMm: number): number;
};

function shapeOf(spec: WheelSpec, teeth: Teeth, gapMm: number): Shape {
  if (spec.kind === 'pole-ring') return poleShape(createPoleField(spec), teeth);
  if (spec.kind === 'magnets') {
    const profile = createMagnetProfile(spec);
    const reach = halfPeakMm(spec, gapMm) / spec.pitchMm;
    return toothShape(teeth, reach, (x, gap) =>
      sumOfTeeth(x, teeth, (d) => profile(Math.abs(d) * spec.pitchMm, gap)),
    );
  }
  const reach = (spec.toothWidth ?? 1) / 2;
  const bump = (d: number) => (Math.abs(d) < reach ? 0.5 + 0.5 * Math.cos((Math.PI * d) / reach) : 0);
  return toothShape(teeth, reach / 2, (x, gap) => {
    return spec.modulationMt * gapDecay(spec.pitchMm, gap) * (2 * sumOfTeeth(x, teeth, bump) - 1);
  });
}

function toothShape({ place }: Teeth, halfWidth: number, field: Shape['field']): Shape {
  const centre = (k: number) => k + 0.5 + (place[k] as number);
  return { riseAt: (k) => centre(k) - halfWidth, fallAt: (k) => centre(k) + halfWidth, field };
}

/** Each north-south pair is stretched between its own rising zero and the next pair's. */
function poleShape(pair: (phase: number, gapMm: number) => number, { n, place, strengths }: Teeth): Shape {
  const riseAt = (k: number) => k + 0.25 + (place[((k % n) + n) % n] as number);
  return {
    riseAt,
    fallAt: (k) => (riseAt(k) + riseAt(k + 1)) / 2,
    field: (x, gapMm) => {
      let k = Math.floor(x - 0.25);
      if (x < riseAt(k)) k -= 1;
      else if (x >= riseAt(k + 1)) k += 1;
      const begin = riseAt(k);
      return pair((x - begin) / (riseAt(k + 1) - begin), gapMm) * (strengths[(k + n) % n] as number);
    },
  };
}

/** Distance beside the axis at which half of the peak is left. */
function halfPeakMm(magnet: CylinderMagnet, gapMm: number): number {
  const half = axialFieldMt(magnet, gapMm) / 2;
  let near = 0;
  let far = magnet.diameterMm + gapMm;
  for (let i = 0; i < 50; i += 1) {
    const middle = (near + far) / 2;
    if (slideByFieldMt(magnet, gapMm, middle) > half) near = middle;
    else far = middle;
  }
  return near;
}

/** Sum over the nearest tooth and its neighbours; tooth k is centred at k + 0.5. */
function sumOfTeeth(x: number, { n, place, strengths }: Teeth, bump: (distance: number) => number): number {
  const nearest = Math.floor(x);
  let sum = 0;
  for (let k = nearest - 1; k <= nearest + 1; k += 1) {
    const index = (k + n) % n;
    sum += (strengths[index] as number) * bump(x - k - 0.5 - (place[index] as number));
  }
  return sum;
}
