/**
 * Goal c as rows. Whole turns are held against the bound (in less than a turn the places of the teeth have a say); what a
 * speed says of its own error holds for all of them, the first turn after a start included.
 */
import type { SpeedMethod } from '@/signal/model';
import type { MotionSpec } from '@/simulator/motion';
import { noiseOverSlope } from '@/tests/accuracy/edges';
import { fromRest, ramping, steady } from '@/tests/accuracy/motions';
import { arrangements, createBench, rpmFor, type Arrangement, type Bench } from '@/tests/accuracy/rigs';
import { runBench } from '@/tests/accuracy/run';
import { isWanted, type AccuracyOptions, type Row, type Section } from '@/tests/accuracy/section';
import { drawsOf } from '@/tests/accuracy/seeds';
import { honest, judgeSpeeds, leastSquaresBound, type SpeedJudgement } from '@/tests/accuracy/speed';
import { rms } from '@/tests/accuracy/statistics';

const floor = 0.001;
const times = 1.5;
const leastHonest = 0.95;
const windowPositions = 8;
/** Standard deviation of a tooth's place on an uneven wheel, share of the pitch. */
const unevenness = 0.02;
const { sine, few, pulses, quadrature, threeHall, missingTwo, missingOne } = arrangements;
const all: Arrangement[] = [sine, few, pulses, quadrature, threeHall, missingTwo, missingOne];
const methods: SpeedMethod[] = ['tooth', 'turn', 'window'];

type Conditions = {
  arrangement: Arrangement;
  method: SpeedMethod;
  snrDb: number;
  uneven: boolean;
  seed: number;
};
type Way = { name: string; motion: (rpm: number) => MotionSpec };

export function speedBench(
  { arrangement, method, snrDb, uneven, seed }: Conditions,
  samplesPerPosition: number,
  motion: (rpm: number) => MotionSpec,
): Bench {
  const draw = drawsOf(seed);
  const samples = samplesPerPosition * draw(1, 1.1);
  const windowS = (windowPositions * samples) / 20_000;
  return createBench(arrangement, {
    motion: motion(rpmFor(arrangement, samples)),
    snrDb,
    seed,
    turnedDeg: draw(0, 360),
    pitchErrorRms: uneven ? unevenness : 0,
    settings: { speed: { method, windowS, stoppedAfterS: 2 } },
  });
}

/** Whole turns: rms relative error over what it may be. */
export function turnFigure(bench: Bench, { speeds }: SpeedJudgement): number {
  const { positions, missing = [] } = bench.rig.spec.wheel;
  const errors = speeds.filter((s) => s.positions === positions).map(({ rpm, trueRpm }) => rpm / trueRpm - 1);
  const bound = leastSquaresBound(noiseOverSlope(bench, undefined, NaN), positions - missing.length);
  return rms(errors) / Math.max(floor, times * bound);
}

/** Long enough for some 150 stretches that do not overlap, so that their share within the error is known to a per cent or two. */
function secondsFor({ wheel }: Arrangement, method: SpeedMethod, samplesPerPosition: number): number {
  const positions = method === 'turn' ? 150 * wheel.positions : 150 * windowPositions;
  return (Math.max(3000, positions) * samplesPerPosition) / 20_000;
}

type Share = { label: string; within: number; count: number; baseless: number };

function honestyRow(method: SpeedMethod, conditions: string, shares: readonly Share[]): Row {
  const worst = shares.reduce((a, b) => (b.within / b.count < a.within / a.count ? b : a));
  const bad = shares.filter(({ within, count }) => !(within >= leastHonest * count));
  const share = ((100 * worst.within) / worst.count).toFixed(1);
  const baseless = shares.reduce((sum, each) => sum + each.baseless, 0);
  const also = baseless > 0 ? `; ${baseless} speeds of no tooth` : '';
  return {
    what: `error said, ${method}`,
    conditions,
    goal: 'truth within 2 errorRpm in 95 %',
    measured: `${share} % at worst (${worst.label}); ${shares.length - bad.length} of ${shares.length} rigs keep it${also}`,
    pass: bad.length === 0,
  };
}

const ways: Way[] = [
  { name: 'steady', motion: steady },
  { name: 'ramping', motion: ramping },
];

type Random = (label: string) => number;

function* longRuns(random: Random, options: AccuracyOptions): Generator<Row> {
  for (const method of methods) {
    for (const way of ways) {
      for (const uneven of [false, true]) {
        const teeth = uneven ? 'uneven teeth (2 %)' : 'even teeth';
        const conditions = `${way.name}, ${teeth}, 20 and 40 dB, 16 and 32 samples a tooth`;
        if (!isWanted(options, 'speed', `error said, ${method}`, conditions, 'speed per turn')) continue;
        const shares: Share[] = [];
        for (const arrangement of all) {
          const share = { label: arrangement.name, within: 0, count: 0, baseless: 0 };
          const figures: number[] = [];
          for (let k = 0; k < 2 * options.rounds; k += 1) {
            for (const snrDb of [20, 40]) {
              const samples = k % 2 === 0 ? 16 : 32;
              const seed = random(`${method} ${conditions} ${arrangement.name} ${snrDb} ${k}`);
              const bench = speedBench({ arrangement, method, snrDb, uneven, seed }, samples, way.motion);
              const judged = judgeSpeeds(bench, runBench(bench, secondsFor(arrangement, method, samples)));
              share.within += honest(judged.speeds);
              share.count += judged.speeds.length + judged.baseless;
              share.baseless += judged.baseless;
              if (method === 'turn') figures.push(turnFigure(bench, judged));
            }
          }
          shares.push(share);
          if (method !== 'turn') continue;
          const worst = Math.max(...figures);
          yield {
            what: 'speed per turn, rms',
            conditions: `${arrangement.name}; ${way.name}, ${teeth}`,
            goal: '1 of max(0.1 %, 1.5 x least squares)',
            measured: `${worst.toFixed(2)} of it at worst`,
            pass: figures.every((figure) => figure <= 1),
          };
        }
        yield honestyRow(method, conditions, shares);
      }
    }
  }
}

const starts: (Way & { seconds: number })[] = [
  { name: 'the stream begins at speed', motion: steady, seconds: 0.21 },
  { name: 'from rest', motion: (rpm) => fromRest(rpm, 0.25, 0.1), seconds: 0.5 },
];

function* firstTurns(random: Random, options: AccuracyOptions): Generator<Row> {
  for (const method of methods) {
    for (const { name, motion, seconds } of starts) {
      for (const uneven of [false, true]) {
        const teeth = uneven ? 'uneven teeth (2 %)' : 'even teeth';
        const conditions = `first turn, ${name}; ${teeth}, 20 and 40 dB, 20 samples a tooth`;
        if (!isWanted(options, 'speed', `error said, ${method}`, conditions)) continue;
        const shares: Share[] = [];
        for (const arrangement of [sine, few, quadrature, missingOne]) {
          const share = { label: arrangement.name, within: 0, count: 0, baseless: 0 };
          for (let k = 0; k < 120 * options.rounds; k += 1) {
            const snrDb = k % 2 === 0 ? 20 : 40;
            const seed = random(`${method} ${conditions} ${arrangement.name} ${k}`);
            const bench = speedBench({ arrangement, method, snrDb, uneven, seed }, 20, motion);
            const { speeds, baseless } = judgeSpeeds(bench, runBench(bench, seconds));
            const first = speeds.filter(({ isFirstTurn }) => isFirstTurn);
            share.within += honest(first);
            share.count += first.length + baseless;
            share.baseless += baseless;
          }
          shares.push(share);
        }
        yield honestyRow(method, conditions, shares);
      }
    }
  }
}

export const speedSection: Section = {
  name: 'speed',
  *run(random, options) {
    yield* longRuns(random, options);
    yield* firstTurns(random, options);
  },
};
