/** Wheels of all makes: sizes, gaps and the small errors that a sound one has. */
import { createWheel, type WheelSpec } from '@/simulator/wheel';
import type { Draw } from '@/tests/accuracy/findings/draw';

export type WheelKind = WheelSpec['kind'];
export type DrawnWheel = { wheel: WheelSpec; gapMm: number; lengthMm: number };

/** Errors that no rule may complain of: share of the pitch, share of the swing. */
export type Tolerances = { pitchRms: [number, number]; strength: number; runOutShare: number };
export const soundTolerances: Tolerances = { pitchRms: [0.0005, 0.006], strength: 0.03, runOutShare: 0.04 };

const fewest: Record<WheelKind, number> = { toothed: 8, 'pole-ring': 2, magnets: 1 };
const most: Record<WheelKind, number> = { toothed: 80, 'pole-ring': 40, magnets: 10 };

export function drawPositions(draw: Draw, kind: WheelKind, [low, high]: [number, number]): number {
  const from = Math.max(low, fewest[kind]);
  const to = Math.min(high, most[kind]);
  return Math.round(draw.log(from, to));
}

export function drawWheel(
  draw: Draw,
  kind: WheelKind,
  positions: number,
  missing: number,
  tolerances: Tolerances,
  evenHalves: boolean,
): DrawnWheel {
  const common = {
    positions,
    missing: Array.from({ length: missing }, (_, i) => positions - missing + i),
    pitchErrorRms: draw.log(...tolerances.pitchRms),
    strengths: Object.fromEntries(
      Array.from({ length: positions }, (_, k) => [k, 1 + tolerances.strength * draw.uniform(-1, 1)]),
    ),
  };
  const runOut = tolerances.runOutShare * draw.uniform(0, 1);
  switch (kind) {
    case 'toothed': {
      const pitchMm = draw.uniform(5, 12);
      const drawn = draw.chance(0.6) ? 1 : draw.uniform(0.7, 1);
      // Narrow teeth make the states of a ring uneven, which is what a phase error is.
      const toothWidth = evenHalves ? 1 : drawn;
      const modulationMt = draw.uniform(60, 110);
      const wheel: WheelSpec = { kind, ...common, pitchMm, modulationMt, toothWidth };
      return withRunOut(wheel, pitchMm * draw.uniform(0.12, 0.3), pitchMm, runOut);
    }
    case 'pole-ring': {
      const pairLengthMm = draw.uniform(5, 18);
      const ring = { pairLengthMm, thicknessMm: draw.uniform(1.5, 3), remanenceT: draw.uniform(0.2, 0.3) };
      const wheel: WheelSpec = { kind, ...common, ...ring };
      return withRunOut(wheel, pairLengthMm * draw.uniform(0.15, 0.3), pairLengthMm, runOut);
    }
    case 'magnets': {
      const diameterMm = draw.uniform(4, 8);
      const gapMm = draw.uniform(2, 4);
      const pitchMm = diameterMm * draw.uniform(3, 6);
      const magnet = { diameterMm, lengthMm: draw.uniform(3, 5), remanenceT: draw.uniform(1.05, 1.3) };
      return withRunOut({ kind, ...common, ...magnet, pitchMm }, gapMm, 2 * Math.PI * gapMm, runOut);
    }
  }
}

/** Run-out that makes the swing go up and down by so large a share: exp(2 pi e / length) is about 1 + 2 pi e / length. */
function withRunOut(wheel: WheelSpec, gapMm: number, lengthMm: number, share: number): DrawnWheel {
  return { wheel: { ...wheel, runOutMm: runOutFor(lengthMm, share) }, gapMm, lengthMm };
}

/** How far off its axis a wheel is whose swing goes up and down by so large a share, mm. */
export function runOutFor(lengthMm: number, share: number): number {
  return (share * lengthMm) / (2 * Math.PI);
}

export type Field = { lowMt: number; highMt: number; rmsMt: number };

/** What one turn shows, at the designed gap. */
export function fieldOf({ wheel, gapMm }: DrawnWheel, seed: number): Field {
  const built = createWheel(wheel, seed, gapMm);
  const count = 48 * wheel.positions;
  let lowMt = Infinity;
  let highMt = -Infinity;
  let sum = 0;
  let squares = 0;
  for (let i = 0; i < count; i += 1) {
    const field = built.fieldMt(i / count, gapMm);
    lowMt = Math.min(lowMt, field);
    highMt = Math.max(highMt, field);
    sum += field;
    squares += field * field;
  }
  const mean = sum / count;
  return { lowMt, highMt, rmsMt: Math.sqrt(Math.max(0, squares / count - mean * mean)) };
}
