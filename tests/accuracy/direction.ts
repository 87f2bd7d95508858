/** Goal d: the net count, and which way the shaft turns, on rings of states. */
import { positionsAt } from '@/tests/accuracy/match';
import type { Programme } from '@/tests/accuracy/moves';
import type { Bench } from '@/tests/accuracy/rigs';
import { runBench } from '@/tests/accuracy/run';

export type DirectionRun = {
  /** Net cycles counted less those that passed, from `countFromS` to the end; whole steps, 0 where exact. */
  countError: number;
  reversals: number;
  /** The longest way from a reversal to the sample at which the new direction was known, cycles; Infinity: not within the move. */
  longestWay: number;
  /** Blocks, and speeds, of a direction that the shaft had left for more than one cycle. */
  wrong: number;
};

/** The share of a cycle that may pass between two looks at what is said. */
const look = 1 / 40;
const onePulse = 1;
/** Where on a pole ring the first channel rises, positions; the others' edges divide the cycle evenly from there. */
export const firstEdge = 0.25;

/**
 * @param countFromS here and at the end the shaft stands away from all edges, so that the count is one number only.
 */
export function runDirection(
  bench: Bench,
  programme: Programme,
  countFromS: number,
  perS: number,
): DirectionRun {
  const { rateHz } = bench.rig.spec;
  const blockSamples = Math.max(2, Math.round((look * rateHz) / perS));
  const turned = turningPoints(programme);
  const run: DirectionRun = { countError: NaN, reversals: 0, longestWay: 0, wrong: 0 };
  const known = new Array<number>(turned.length).fill(Infinity);
  let countedBefore = NaN;
  let said = 'unknown';
  let taken = 0;
  let at = -1;

  const result = runBench(bench, programme.endS, blockSamples, (directions, nowS, status) => {
    for (; taken < directions.length; taken += 1) said = directions[taken]!.value;
    if (Number.isNaN(countedBefore) && nowS >= countFromS) countedBefore = status().pulses;
    while (at + 1 < turned.length && turned[at + 1]!.tS <= nowS) at += 1;
    const turn = turned[at];
    if (!turn) return;
    const way = Math.abs(positionsAt(bench, nowS) - turn.position);
    if (said === turn.value) known[at] = Math.min(known[at]!, way);
    else if (way > onePulse && said !== 'unknown' && said !== 'stopped') run.wrong += 1;
  });

  for (const { t, rpm } of result.speed) {
    if (Number.isNaN(rpm) || rpm === 0) continue;
    const turn = turned.findLast(({ tS }) => tS <= t);
    if (!turn || Math.abs(positionsAt(bench, t) - turn.position) <= onePulse) continue;
    if (rpm > 0 !== (turn.value === 'forward')) run.wrong += 1;
  }
  turned.forEach(({ isReversal, reach }, k) => {
    // A move of less than a pulse may go unsaid.
    if (!isReversal || reach <= onePulse) return;
    run.reversals += 1;
    run.longestWay = Math.max(run.longestWay, known[k]!);
  });
  run.countError = result.status.pulses - countedBefore - netCycles(bench, countFromS, programme.endS);
  return run;
}

type TurningPoint = {
  tS: number;
  position: number;
  value: 'forward' | 'reverse';
  /** The first move after the beginning reverses nothing. */
  isReversal: boolean;
  /** How far the shaft then goes before it turns back, positions. */
  reach: number;
};

function turningPoints({ stretches }: Programme): TurningPoint[] {
  const points: TurningPoint[] = [];
  for (const { fromS, from, to } of stretches) {
    if (to === from) continue;
    const value = to > from ? 'forward' : 'reverse';
    const last = points[points.length - 1];
    if (last?.value === value) last.reach = Math.abs(to - last.position);
    else
      points.push({
        tS: fromS,
        position: from,
        value,
        isReversal: last !== undefined,
        reach: Math.abs(to - from),
      });
  }
  return points;
}

/**
 * Cycles between two instants at which the shaft stands in the middle of a state, on a ring of even pitch: from the angle
 * alone, since a shaft that turns back exactly on an edge passes it and does not.
 */
function netCycles(bench: Bench, fromS: number, toS: number): number {
  const steps = 2 * bench.rig.spec.channels.length;
  const states = (tS: number) => Math.floor((positionsAt(bench, tS) - firstEdge) * steps);
  return (states(toS) - states(fromS)) / steps;
}
