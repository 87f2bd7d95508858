/**
 * Goal e as rows. A shaft stops within a tooth or over many, or drops to a twentieth of its speed and creeps on, so that each
 * silence is long and the next edge comes just as the bound meets the true speed.
 */
import { runBound, type BoundRun } from '@/tests/accuracy/bound';
import { slowing } from '@/tests/accuracy/motions';
import { arrangements, createBench, rpmFor, type Arrangement } from '@/tests/accuracy/rigs';
import { isWanted, type Row, type Section } from '@/tests/accuracy/section';
import { drawsOf } from '@/tests/accuracy/seeds';

const { sine, pulses, quadrature, threeHall, missingTwo, missingOne } = arrangements;
const all: Arrangement[] = [sine, pulses, quadrature, threeHall, missingTwo, missingOne];
const samplesPerPosition = 40;
const stopsS = [0.02, 0.3, 1.2];
const creeping = 1 / 20;
const stoppedAfterS = 1;

/** Bit 0 of `kind`: 40 dB, else 20 dB. Bit 1: uneven teeth. */
export function boundRun(
  arrangement: Arrangement,
  slowS: number,
  share: number,
  kind: number,
  seed: number,
): BoundRun {
  const draw = drawsOf(seed);
  const rpm = rpmFor(arrangement, samplesPerPosition) * draw(0.9, 1.1);
  const steadyS = 0.8 + draw(0, 0.2);
  const bench = createBench(arrangement, {
    motion: slowing(rpm, steadyS, slowS, share * rpm),
    snrDb: kind & 1 ? 40 : 20,
    seed,
    turnedDeg: draw(0, 360),
    pitchErrorRms: kind & 2 ? 0.02 : 0,
    settings: { speed: { method: 'turn', windowS: 0.1, stoppedAfterS } },
  });
  return runBound(bench, steadyS, steadyS + slowS + 1.3, rpm);
}

function holdsRow(conditions: string, runs: readonly BoundRun[]): Row {
  const looks = runs.reduce((sum, run) => sum + run.looks, 0);
  const below = runs.reduce((sum, run) => sum + run.below, 0);
  const bad = runs.filter((run) => run.below > 0).length;
  const least = Math.min(...runs.map(({ leastRatio }) => leastRatio)).toFixed(3);
  return {
    what: 'speed bound holds',
    conditions,
    goal: 'never below the true speed',
    measured:
      below === 0
        ? `held in ${looks} looks, ${least} x the true speed at least`
        : `below in ${below} of ${looks} looks, in ${bad} of ${runs.length} runs, ${least} x at worst`,
    pass: below === 0,
  };
}

function fallsRow(conditions: string, runs: readonly BoundRun[]): Row {
  const rising = runs.filter((run) => run.rises > 0).length;
  const most = Math.max(...runs.map(({ endShare }) => endShare));
  const end = `${(100 * most).toFixed(2)} % of the speed left at the end`;
  return {
    what: 'speed bound falls',
    conditions,
    goal: 'no rise without an edge, below 5 %',
    measured: rising === 0 ? end : `${end}; rose without an edge in ${rising} of ${runs.length} runs`,
    pass: rising === 0 && most < 0.05,
  };
}

export const boundSection: Section = {
  name: 'bound',
  *run(random, options) {
    for (const arrangement of all) {
      const both = `20 and 40 dB, even and uneven teeth`;
      const stop = `${arrangement.name}; stops within 0.02 to 1.2 s, ${both}`;
      if (isWanted(options, 'bound', 'speed bound holds', 'speed bound falls', stop)) {
        const runs: BoundRun[] = [];
        for (let k = 0; k < 36 * options.rounds; k += 1) {
          const slowS = stopsS[Math.floor(k / 4) % stopsS.length]!;
          runs.push(boundRun(arrangement, slowS, 0, k % 4, random(`${stop} ${k}`)));
        }
        yield holdsRow(stop, runs);
        yield fallsRow(stop, runs);
      }
      const creep = `${arrangement.name}; drops to 1/20 of its speed and creeps, ${both}`;
      if (isWanted(options, 'bound', 'speed bound holds', creep)) {
        const runs: BoundRun[] = [];
        for (let k = 0; k < 24 * options.rounds; k += 1)
          runs.push(boundRun(arrangement, 0.05, creeping, k % 4, random(`${creep} ${k}`)));
        yield holdsRow(creep, runs);
      }
    }
  },
};
