/** Goal d as rows: moves to and fro, dither on an edge and stands on it, quick and slow. */
import { firstEdge, runDirection, type DirectionRun } from '@/tests/accuracy/direction';
import { move, programmeOf, stand, type Move, type Programme } from '@/tests/accuracy/moves';
import { arrangements, createBench, type Arrangement } from '@/tests/accuracy/rigs';
import { isWanted, type Row, type Section } from '@/tests/accuracy/section';
import { drawsOf } from '@/tests/accuracy/seeds';

const { quadrature, threeHall } = arrangements;
const rateHz = 20_000;

/** With the steps a cycle. */
const rings: { arrangement: Arrangement; steps: number }[] = [
  { arrangement: quadrature, steps: 4 },
  { arrangement: threeHall, steps: 6 },
];

type Draw = (from: number, to: number) => number;
type Scene = { name: string; moves: (draw: Draw, perS: number, steps: number) => Move[] };

/** Keeps count of where the shaft is, so that a scene can say where it is to go. */
function traveller(perS: number, startAt: number) {
  const moves: Move[] = [];
  let at = startAt;
  return {
    moves,
    get at() {
      return at;
    },
    to(place: number, speed = perS) {
      if (Math.abs(place - at) > 1e-6) moves.push(move(place - at, speed, 2 / perS));
      at = place;
    },
    stand: (standS: number) => moves.push(stand(standS)),
  };
}

/** On the way in: levels are found, and the shaft stands in the middle of a state. */
function begun(perS: number, steps: number) {
  const shaft = traveller(perS, 0);
  shaft.stand(0.6);
  shaft.to(6 + middle(steps));
  shaft.stand(0.8);
  return shaft;
}

function middle(steps: number): number {
  return firstEdge + 0.5 / steps;
}

const scenes: Scene[] = [
  {
    name: 'reversals anywhere',
    moves: (draw, perS, steps) => {
      const shaft = begun(perS, steps);
      for (let k = 0; k < 12; k += 1) shaft.to(draw(-8, 9));
      shaft.to(Math.floor(shaft.at) + 5 + middle(steps));
      shaft.stand(0.2);
      return shaft.moves;
    },
  },
  {
    name: 'dither on an edge, and stands on it',
    moves: (draw, perS, steps) => {
      const shaft = begun(perS, steps);
      for (let k = 0; k < 5; k += 1) {
        const edge = Math.floor(draw(2, 12)) + firstEdge + Math.floor(draw(0, steps)) / steps;
        shaft.to(edge);
        shaft.stand(0.05);
        const half = draw(0.01, 0.6 / steps);
        for (let n = 0; n < 8; n += 1) shaft.to(edge + (n % 2 === 0 ? half : -half));
      }
      shaft.to(Math.floor(shaft.at) + 5 + middle(steps));
      shaft.stand(0.2);
      return shaft.moves;
    },
  },
  {
    // Between edges as well as on them, so that what one line sees of it is cut short on either side.
    name: 'shakes at one place',
    moves: (draw, perS, steps) => {
      const shaft = begun(perS, steps);
      for (let k = 0; k < 4; k += 1) {
        const place = shaft.at + draw(-9, 9);
        shaft.to(place);
        shaft.stand(draw(0, 0.1));
        const half = draw(0.02, 0.3);
        const times = Math.floor(draw(10, 90));
        for (let n = 0; n < times; n += 1) shaft.to(place + (n % 2 === 0 ? half : -half) * draw(0.85, 1.15));
        shaft.stand(draw(0.01, 0.4));
      }
      shaft.to(Math.floor(shaft.at) + 5 + middle(steps));
      shaft.stand(0.2);
      return shaft.moves;
    },
  },
  {
    name: 'long ways to and fro',
    moves: (draw, perS, steps) => {
      const shaft = begun(perS, steps);
      const length = Math.min(1500, perS);
      shaft.to(length * draw(0.8, 1));
      shaft.to(-length * draw(0.8, 1));
      shaft.to(middle(steps));
      shaft.stand(0.2);
      return shaft.moves;
    },
  },
];

type Speed = { name: string; samplesPerCycle: number; runs: number };
const speeds: Speed[] = [
  { name: '20 samples a cycle', samplesPerCycle: 20, runs: 12 },
  { name: '150 samples a cycle', samplesPerCycle: 150, runs: 24 },
  { name: '2,000 samples a cycle', samplesPerCycle: 2000, runs: 3 },
];

export function runScene(
  { arrangement, steps }: (typeof rings)[number],
  scene: Scene,
  samplesPerCycle: number,
  snrDb: number,
  seed: number,
): DirectionRun {
  const perS = rateHz / samplesPerCycle;
  const programme: Programme = programmeOf(
    scene.moves(drawsOf(seed), perS, steps),
    arrangement.wheel.positions,
  );
  const bench = createBench(arrangement, { motion: programme.motion, snrDb, seed });
  // The end of the stand on the way in.
  return runDirection(bench, programme, programme.stretches[2]!.toS, perS);
}

export const directionCases = { rings, scenes };

function* rowsOf(conditions: string, runs: readonly DirectionRun[]): Generator<Row> {
  const wrongCounts = runs.filter(({ countError }) => !(Math.abs(countError) < 1e-9));
  yield {
    what: 'net count',
    conditions,
    goal: 'exact',
    measured:
      wrongCounts.length === 0
        ? `exact in ${runs.length} runs`
        : `wrong in ${wrongCounts.length} of ${runs.length} runs, e.g. by ${wrongCounts[0]?.countError.toFixed(2)}`,
    pass: wrongCounts.length === 0,
  };
  const reversals = runs.reduce((sum, run) => sum + run.reversals, 0);
  const wrong = runs.reduce((sum, run) => sum + run.wrong, 0);
  const longest = Math.max(...runs.map(({ longestWay }) => longestWay));
  yield {
    what: 'reversal known',
    conditions,
    goal: 'within 1 cycle, none wrong beyond',
    measured: `within ${longest.toFixed(2)} cycles in ${reversals} reversals, ${wrong} wrong beyond one`,
    pass: longest <= 1 && wrong === 0,
  };
}

export const directionSection: Section = {
  name: 'direction',
  *run(random, options) {
    for (const ring of rings) {
      for (const scene of scenes) {
        for (const { name, samplesPerCycle, runs } of speeds) {
          const conditions = `${ring.arrangement.name}; ${scene.name}, ${name}, 20 dB`;
          if (!isWanted(options, 'direction', 'net count', 'reversal known', conditions)) continue;
          const found: DirectionRun[] = [];
          for (let k = 0; k < runs * options.rounds; k += 1)
            found.push(runScene(ring, scene, samplesPerCycle, 20, random(`${conditions} ${k}`)));
          yield* rowsOf(conditions, found);
        }
      }
    }
  },
};
