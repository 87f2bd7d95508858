/** The field round a wheel, by kind: each tooth, magnet or pole pair at its place, with its strength. */
import {
  axialFieldMt,
  createMagnetProfile,
  slideByFieldMt,
  type CylinderMagnet,
} from '@/simulator/cylinder-field';
import { createPoleField, gapDecay } from '@/simulator/pole-ring-field';
import type { MagnetWheel, PoleWheel, ToothedWheel, WheelSpec } from '@/simulator/wheel';

type Teeth = { n: number; places: Float64Array; strengths: Float64Array };
export type Shape = {
  riseAt(position: number): number;
  fallAt(position: number): number;
  field(positions: number, gapMm: number): number;
  /** What a whole tooth changes, mT: from slot to tooth, or from pole to pole. */
  toothMt(gapMm: number): number;
};

/** Keeps reading `teeth`, which faults change. */
export function shapeOf(spec: WheelSpec, teeth: Teeth, gapMm: number): Shape {
  switch (spec.kind) {
    case 'pole-ring':
      return poleShape(spec, teeth);
    case 'magnets':
      return magnetShape(spec, teeth, gapMm);
    case 'toothed':
      return toothedShape(spec, teeth);
  }
}

function toothedShape(spec: ToothedWheel, teeth: Teeth): Shape {
  const reach = (spec.toothWidth ?? 1) / 2;
  const bump = (d: number) => (Math.abs(d) < reach ? 0.5 + 0.5 * Math.cos((Math.PI * d) / reach) : 0);
  const modulation = remembered((gap) => spec.modulationMt * gapDecay(spec.pitchMm, gap));
  return {
    ...flanks(teeth, reach / 2),
    field: (x, gap) => modulation(gap) * (2 * sumOfTeeth(x, teeth, bump) - 1),
    toothMt: (gap) => 2 * modulation(gap),
  };
}

function magnetShape(spec: MagnetWheel, teeth: Teeth, gapMm: number): Shape {
  const profile = createMagnetProfile(spec);
  return {
    ...flanks(teeth, halfPeakMm(spec, gapMm) / spec.pitchMm),
    field: (x, gap) => sumOfTeeth(x, teeth, (d) => profile(Math.abs(d) * spec.pitchMm, gap)),
    toothMt: (gap) => profile(0, gap),
  };
}

function flanks({ places }: Teeth, halfWidth: number): Pick<Shape, 'riseAt' | 'fallAt'> {
  const centre = (k: number) => k + 0.5 + (places[k] as number);
  return { riseAt: (k) => centre(k) - halfWidth, fallAt: (k) => centre(k) + halfWidth };
}

/** Each north-south pair is stretched between its own rising zero and the next pair's. */
function poleShape(spec: PoleWheel, { n, places, strengths }: Teeth): Shape {
  const pair = createPoleField(spec);
  const riseAt = (k: number) => k + 0.25 + (places[((k % n) + n) % n] as number);
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
    toothMt: (gapMm) => 2 * pair(0.25, gapMm),
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
function sumOfTeeth(x: number, { n, places, strengths }: Teeth, bump: (distance: number) => number): number {
  const nearest = Math.floor(x);
  let sum = 0;
  for (let k = nearest - 1; k <= nearest + 1; k += 1) {
    const index = k < 0 || k >= n ? ((k % n) + n) % n : k;
    sum += (strengths[index] as number) * bump(x - k - 0.5 - (places[index] as number));
  }
  return sum;
}

/** The gap seldom changes from one sample to the next. */
function remembered(f: (gapMm: number) => number): (gapMm: number) => number {
  let at = NaN;
  let value = NaN;
  return (gapMm) => {
    if (gapMm !== at) {
      at = gapMm;
      value = f(gapMm);
    }
    return value;
  };
}
