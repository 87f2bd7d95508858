/** The wheel as a field source: what the sensor sees at a wheel angle and a gap. */
import { createBurrHeight, type Burr } from '@/simulator/burr';
import type { CylinderMagnet } from '@/simulator/cylinder-field';
import type { PoleRing } from '@/simulator/pole-ring-field';
import { normalAt, subSeed } from '@/simulator/random';
import { shapeOf } from '@/simulator/wheel-shape';

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
  /** Strength of each position and how far it is off its place, in pitches; faults change both. */
  strengths: Float64Array;
  places: Float64Array;
  burrs: readonly Burr[];
  /** Where, in positions (0 .. positions), the field of position k rises and falls through its middle. */
  riseAt(position: number): number;
  fallAt(position: number): number;
  present(position: number): boolean;
  /** Field at the sensor, mT. `turns` of the wheel, less the sensor's own place. */
  fieldMt(turns: number, gapMm: number): number;
  /**
   * Turns by which a wheel that is off its axis by `runOutMm` is seen sooner or later: its centre moves sideways by
   * runOut sin(angle), which at the rim is an angle of runOut / radius.
   */
  runOutTurns(turns: number, runOutMm: number): number;
};

/** `gapMm`: the designed gap, where the middle of a magnet's field is taken. */
export function createWheel(spec: WheelSpec, seed: number, gapMm: number): Wheel {
  const n = spec.positions;
  const gone = new Set(spec.missing ?? []);
  const places = new Float64Array(n);
  const strengths = new Float64Array(n);
  const wheelSeed = subSeed(seed, 'wheel');
  for (let k = 0; k < n; k += 1) {
    places[k] = (spec.pitchErrorRms ?? 0) * normalAt(wheelSeed, k) + (spec.pitchErrors?.[k] ?? 0);
    strengths[k] = gone.has(k) ? 0 : (spec.strengths?.[k] ?? 1);
  }
  const shape = shapeOf(spec, { n, places, strengths }, gapMm);
  const burrHeight = createBurrHeight(n, wheelSeed);
  const rimMm = n * (spec.kind === 'pole-ring' ? spec.pairLengthMm : spec.pitchMm);
  const wheel: Wheel = {
    positions: n,
    strengths,
    places,
    burrs: [],
    riseAt: shape.riseAt,
    fallAt: shape.fallAt,
    present: (k) => !gone.has(k),
    fieldMt: (turns, gap) => {
      const field = shape.field((turns - Math.floor(turns)) * n, gap);
      if (wheel.burrs.length === 0) return field;
      return field + shape.toothMt(gap) * burrHeight(wheel.burrs, turns);
    },
    runOutTurns: (turns, runOutMm) => (runOutMm / rimMm) * Math.sin(2 * Math.PI * turns),
  };
  return wheel;
}
