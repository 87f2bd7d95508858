/** What really happened, from closed forms, on the true time axis (s since the simulation began). */
import type { Motion } from '@/simulator/motion';
import type { Wheel } from '@/simulator/wheel';

export type ToothPass = {
  tS: number;
  /** Position on the wheel, 0-based. */
  position: number;
  /** The field goes up at this instant (turning back, a rise is passed as a fall). */
  rising: boolean;
  direction: 'forward' | 'reverse';
};

export type Truth = {
  /** Shaft angle since the start, rad. */
  angleAt(tS: number): number;
  /** Turns of the shaft since the start, signed. */
  turnsAt(tS: number): number;
  /** Signed. */
  speedRpmAt(tS: number): number;
  directionAt(tS: number): 'forward' | 'reverse' | 'stopped';
  /**
   * The instants in [fromS, toS) at which a tooth's flank passes a sensor that stands `placeTurns` of the wheel
   * further on: where its field goes through the middle. Missing positions are left out.
   */
  toothTimes(fromS: number, toS: number, placeTurns?: number): ToothPass[];
};

/** `runOutMm`: how far the wheel's centre is off its axis as built. */
export function createTruth(motion: Motion, wheel: Wheel, gearRatio: number, runOutMm = 0): Truth {
  const n = wheel.positions;

  /** Turns of the wheel as they pass before a sensor. */
  function seenTurns(tS: number): number {
    const turns = motion.turnsAt(tS) * gearRatio;
    return runOutMm ? turns + wheel.runOutTurns(turns, runOutMm) : turns;
  }

  function passes(fromS: number, toS: number, place: number, out: ToothPass[]): void {
    const at = (tS: number) => (seenTurns(tS) - place) * n;
    const begin = at(fromS);
    const end = at(toS);
    if (begin === end) return;
    const forward = end > begin;
    const low = Math.min(begin, end);
    const high = Math.max(begin, end);
    const found: ToothPass[] = [];
    for (let k = Math.floor(low) - 1; k <= high + 1; k += 1) {
      const position = ((k % n) + n) % n;
      if (!wheel.present(position)) continue;
      for (const rise of [true, false]) {
        const mark = (rise ? wheel.riseAt(position) : wheel.fallAt(position)) + (k - position);
        // Half-open on the way in, so that two neighbouring stretches never both count one.
        const within = forward ? mark >= begin && mark < end : mark <= begin && mark > end;
        if (!within) continue;
        const tS = instantOf(at, mark, fromS, toS, forward);
        found.push({ tS, position, rising: rise === forward, direction: forward ? 'forward' : 'reverse' });
      }
    }
    found.sort((a, b) => a.tS - b.tS);
    out.push(...found);
  }

  return {
    angleAt: (tS) => 2 * Math.PI * motion.turnsAt(tS),
    turnsAt: motion.turnsAt,
    speedRpmAt: (tS) => 60 * motion.speedAt(tS),
    directionAt: (tS) => {
      const speed = motion.speedAt(tS);
      return speed > 0 ? 'forward' : speed < 0 ? 'reverse' : 'stopped';
    },
    toothTimes: (fromS, toS, placeTurns = 0) => {
      const out: ToothPass[] = [];
      for (const part of motion.monotoneParts(fromS, toS)) passes(part.fromS, part.toS, placeTurns, out);
      return out;
    },
  };
}

/** Bisection until the interval is one float64 step wide. */
function instantOf(
  at: (tS: number) => number,
  mark: number,
  fromS: number,
  toS: number,
  forward: boolean,
): number {
  let low = fromS;
  let high = toS;
  for (let i = 0; i < 200; i += 1) {
    const middle = (low + high) / 2;
    if (middle <= low || middle >= high) break;
    if (at(middle) < mark === forward) low = middle;
    else high = middle;
  }
  return high;
}
