/** Goal c: each speed said, against the true mean speed of the stretch that it is said for, and within what it says of its error. */
import { passesOf, positionsAt } from '@/tests/accuracy/match';
import type { Bench } from '@/tests/accuracy/rigs';
import type { RunResult } from '@/tests/accuracy/run';

export type JudgedSpeed = {
  trueRpm: number;
  rpm: number;
  errorRpm: number;
  /** Positions of the wheel in the stretch. */
  positions: number;
  /** Within the first turn after a start. */
  isFirstTurn: boolean;
};

export type SpeedJudgement = {
  speeds: JudgedSpeed[];
  /** Speeds said at an edge that no tooth made: nothing true to hold them against. */
  baseless: number;
};

type Tooth = { tS: number; turns: number; place: number };

/** Rising flanks of the first channel, each with its place: positions of the wheel counted from the first. */
function teethOf(bench: Bench, endS: number): Tooth[] {
  const { truth, spec } = bench.rig;
  const n = spec.wheel.positions;
  let place = 0;
  let before = NaN;
  return passesOf(bench, 0, 0, endS)
    .filter((pass) => pass.rising)
    .map(({ tS, position }) => {
      if (!Number.isNaN(before)) place += (position - before + n) % n || n;
      before = position;
      return { tS, turns: truth.turnsAt(tS), place };
    });
}

/**
 * The stretch that a speed is said for ends with the tooth at its instant. It begins, by method: `tooth`, with the tooth seen
 * before; `turn`, with the earliest tooth seen within one turn; `window`, with the earliest seen within `windowS`, two teeth at
 * least. None reaches back beyond the opening of an unknown stretch. On a shaft that turns forward.
 */
export function judgeSpeeds(bench: Bench, { speed, flanks, endS }: RunResult): SpeedJudgement {
  const { method, windowS } = bench.settings.speed;
  const n = bench.rig.spec.wheel.positions;
  const teeth = teethOf(bench, endS);
  const places = teeth.map(({ tS }) => positionsAt(bench, tS));
  const seen: { midT: number; tooth: Tooth | null }[] = [];
  let near = 0;
  for (const { midT, rising } of flanks[0]!) {
    if (!rising) continue;
    const at = positionsAt(bench, midT);
    while (near + 1 < places.length && Math.abs(places[near + 1]! - at) <= Math.abs(places[near]! - at))
      near += 1;
    const isOwn = near < places.length && Math.abs(places[near]! - at) <= 0.25;
    seen.push({ midT, tooth: isOwn ? teeth[near]! : null });
  }
  const judged: SpeedJudgement = { speeds: [], baseless: 0 };
  let openS = 0;
  let opening = 0;
  let last = 0;
  for (const { t, rpm, errorRpm } of speed) {
    if (Number.isNaN(rpm) || rpm === 0) {
      openS = t;
      continue;
    }
    while (last + 1 < seen.length && seen[last + 1]!.midT <= t + 1e-9) last += 1;
    const end = seen[last]?.tooth;
    let first = last;
    while (opening < last && seen[opening]!.midT < openS - 1e-9) opening += 1;
    const isWithin = (k: number) => {
      const { midT, tooth } = seen[k]!;
      if (k < opening || !tooth || !end) return false;
      if (k === last - 1) return true;
      if (method === 'tooth') return false;
      return method === 'turn' ? end.place - tooth.place <= n : midT >= t - windowS;
    };
    while (first > 0 && isWithin(first - 1)) first -= 1;
    const begin = seen[first]?.tooth;
    if (!end || !begin || begin === end) {
      judged.baseless += 1;
      continue;
    }
    const opened = seen[opening]!.tooth ?? begin;
    judged.speeds.push({
      trueRpm: (60 * (end.turns - begin.turns)) / (end.tS - begin.tS),
      rpm: Math.abs(rpm),
      errorRpm,
      positions: end.place - begin.place,
      isFirstTurn: end.place - opened.place <= n,
    });
  }
  return judged;
}

/** Speeds within twice what they say of their error. A speed without an error is not. */
export function honest(speeds: readonly JudgedSpeed[]): number {
  return speeds.filter(({ rpm, trueRpm, errorRpm }) => Math.abs(rpm - trueRpm) <= 2 * errorRpm).length;
}

/**
 * Least-squares bound of the relative error of the mean speed over K equal intervals: (sigma_t / T) sqrt(12 / (K (K + 1) (K + 2))).
 * @param noiseOverSlope sigma_t / T: noise over slope in positions.
 */
export function leastSquaresBound(noiseOverSlope: number, intervals: number): number {
  return noiseOverSlope * Math.sqrt(12 / (intervals * (intervals + 1) * (intervals + 2)));
}
