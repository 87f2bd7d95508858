/** A shaft that is moved by given angles, to and fro, with stands between. */
import type { MotionSpec, SpeedSegment } from '@/simulator/motion';

export type Move = {
  /** Signed; 0: stands. */
  positions: number;
  /** Of a position a second at most, and how long it takes to get there from rest; a short move stays slower. */
  perS: number;
  rampS: number;
} & { standS?: number };

export type Stretch = {
  fromS: number;
  toS: number;
  /** Where the shaft is at either end, positions since the beginning. */
  from: number;
  to: number;
};

export function stand(standS: number): Move {
  return { positions: 0, perS: 0, rampS: 0, standS };
}

export function move(positions: number, perS: number, rampS: number): Move {
  return { positions, perS, rampS };
}

export type Programme = { motion: MotionSpec; stretches: Stretch[]; endS: number };

/** Each move begins and ends at rest: an even ramp, a steady part where there is room for one, an even ramp. */
export function programmeOf(moves: readonly Move[], positionsPerTurn: number): Programme {
  const segments: SpeedSegment[] = [];
  const stretches: Stretch[] = [];
  let atS = 0;
  let at = 0;
  for (const { positions, perS, rampS, standS = 0 } of moves) {
    const begin = { fromS: atS, from: at };
    if (positions === 0) {
      segments.push({ durationS: standS, toRpm: 0 });
      atS += standS;
    } else {
      const way = Math.abs(positions);
      const peak = Math.min(perS, Math.sqrt((way * perS) / rampS));
      const upS = (rampS * peak) / perS;
      const steadyS = (way - peak * upS) / peak;
      const rpm = (Math.sign(positions) * 60 * peak) / positionsPerTurn;
      segments.push({ durationS: upS, toRpm: rpm });
      if (steadyS > 1e-9) segments.push({ durationS: steadyS, toRpm: rpm });
      segments.push({ durationS: upS, toRpm: 0 });
      atS += 2 * upS + (steadyS > 1e-9 ? steadyS : 0);
      at += positions;
    }
    stretches.push({ ...begin, toS: atS, to: at });
  }
  return {
    motion: { startRpm: 0, segments: [...segments, { durationS: 1000, toRpm: 0 }] },
    stretches,
    endS: atS,
  };
}
