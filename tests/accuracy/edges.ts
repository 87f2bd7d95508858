/** Goals a and b: every flank found once, at its instant. */
import type { Filter } from '@/signal/model';
import { matchEdges, passesOf, positionsAt } from '@/tests/accuracy/match';
import { fromRest, steady } from '@/tests/accuracy/motions';
import { createBench, rpmFor, type Arrangement, type Bench } from '@/tests/accuracy/rigs';
import { runBench } from '@/tests/accuracy/run';
import { drawsOf } from '@/tests/accuracy/seeds';
import { centred } from '@/tests/accuracy/statistics';

export type EdgeRun = {
  due: number;
  found: number;
  extra: number;
  /** Timing errors over (noise over slope), the mean of each polarity of each channel taken off. */
  errors: number[];
};

/** Levels have settled after so many positions; timing is judged from then on. */
const settling = 12;

/** One rig at one speed, from a place and with a speed that the seed draws. */
export function runSteady(
  arrangement: Arrangement,
  conditions: { samplesPerPosition: number; positions: number; snrDb: number; seed: number; filter?: Filter },
): EdgeRun {
  const draw = drawsOf(conditions.seed);
  // Never a whole number of samples: the flanks meet the sample clock at every phase.
  const samplesPerPosition = conditions.samplesPerPosition * draw(1, 1.06);
  const bench = createBench(arrangement, {
    motion: steady(rpmFor(arrangement, samplesPerPosition)),
    snrDb: conditions.snrDb,
    seed: conditions.seed,
    turnedDeg: draw(0, 360),
    settings: conditions.filter ? { filter: conditions.filter } : {},
  });
  const { rateHz } = bench.rig.spec;
  const seconds = (conditions.positions * samplesPerPosition) / rateHz;
  const unitS =
    (noiseOverSlope(bench, conditions.filter, rateHz / samplesPerPosition) * samplesPerPosition) / rateHz;
  return judgeEdges(bench, seconds, unitS);
}

/** The shaft stands, then runs up, and goes on. */
export function runFromRest(
  arrangement: Arrangement,
  conditions: { samplesPerPosition: number; snrDb: number; seed: number },
): EdgeRun {
  const { samplesPerPosition, snrDb, seed } = conditions;
  const draw = drawsOf(seed);
  const rpm = rpmFor(arrangement, samplesPerPosition);
  const bench = createBench(arrangement, {
    motion: fromRest(rpm, draw(0.2, 0.5), 0.3),
    snrDb,
    seed,
    turnedDeg: draw(0, 360),
  });
  return judgeEdges(bench, 1, NaN);
}

/** @param unitS noise over slope, s; NaN: timing is not judged. */
export function judgeEdges(bench: Bench, seconds: number, unitS: number): EdgeRun {
  const { flanks, endS } = runBench(bench, seconds);
  const run: EdgeRun = { due: 0, found: 0, extra: 0, errors: [] };
  flanks.forEach((list, channel) => {
    const { due, found, extra, pairs } = matchEdges(bench, channel, list, endS);
    run.due += due;
    run.found += found;
    run.extra += extra;
    if (Number.isNaN(unitS)) return;
    const from =
      passesOf(bench, channel, 0, endS).find(({ tS }) => positionsAt(bench, tS) > settling)?.tS ?? endS;
    // Where the middle of the band and the field's middle differ, rising edges come early by what falling ones are late.
    for (const rising of [true, false]) {
      const errors = pairs.filter(({ pass }) => pass.rising === rising && pass.tS >= from);
      run.errors.push(...centred(errors.map(({ pass, midT }) => (midT - pass.tS) / unitS)));
    }
  });
  return run;
}

/** Rms noise over the flank's slope, in positions of the wheel. */
export function noiseOverSlope(
  { ideal, noiseV, rig }: Bench,
  filter: Filter | undefined,
  toothHz: number,
): number {
  const raw = noiseV / ideal.slopeV;
  if (!filter || filter.kind === 'none') return raw;
  if (filter.kind !== 'lowpass' || filter.family !== 'butterworth')
    throw new Error('the noise behind this filter is not known here');
  // Noise bandwidth and gain of a Butterworth low pass of order n, from its definition |H|^2 = 1 / (1 + (f / fc)^2n); the
  // cutoff is far below half the rate, and the signal is near a sine.
  const { order, cutoffHz } = filter;
  const bandHz = (cutoffHz * Math.PI) / (2 * order) / Math.sin(Math.PI / (2 * order));
  const gain = 1 / Math.sqrt(1 + (toothHz / cutoffHz) ** (2 * order));
  return (raw * Math.sqrt(bandHz / (rig.spec.rateHz / 2))) / gain;
}
