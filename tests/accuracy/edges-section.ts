/**
 * Goals a and b as rows.
 *
 * Where noise allows an edge at all: the fitted band is ten noise sigmas wide, and half the swing has room for that down to
 * an SNR of about 12 dB (a sine: swing 2.8 rms). White noise then takes no edge back and makes none, however slow the flank:
 * the rows with thousands of samples a tooth, on which noise moves the signal by more than the flank itself does in dozens of
 * samples, hold without a filter. Below that, levels are not found (nothing rather than something wrong) until a low pass has
 * brought the noise down; such rows have one.
 */
import type { Filter } from '@/signal/model';
import { runFromRest, runSteady, type EdgeRun } from '@/tests/accuracy/edges';
import { arrangements, type Arrangement } from '@/tests/accuracy/rigs';
import { isWanted, type Row, type Section } from '@/tests/accuracy/section';
import { rms } from '@/tests/accuracy/statistics';

const least = 0.999;
const most = 1.5;
const edgeGoal = 'at least 99.9 %, none extra';
const timingGoal = `at most ${most} x noise over slope`;
const perPosition = [12, 25, 60, 180, 420];
const { sine, pulses, switched, quadrature, threeHall, missingTwo, missingOne } = arrangements;
const all: Arrangement[] = [sine, pulses, switched, quadrature, threeHall, missingTwo, missingOne];

type Labelled = { label: string; seed: number; run: EdgeRun };

function foundRow(conditions: string, runs: readonly Labelled[]): Row {
  let due = 0;
  let found = 0;
  let extra = 0;
  for (const { run } of runs) {
    due += run.due;
    found += run.found;
    extra += run.extra;
  }
  const share = `${((100 * found) / due).toFixed(3)} % of ${due}`;
  const bad = runs.filter(({ run }) => run.found < run.due || run.extra > 0);
  const where =
    bad.length > 0
      ? `, in ${bad.length} of ${runs.length} runs, e.g. ${bad[0]?.label} (${bad[0]?.seed})`
      : '';
  return {
    what: 'edges found',
    conditions,
    goal: edgeGoal,
    measured: `${share}, ${extra} extra${where}`,
    pass: found >= least * due && extra === 0,
  };
}

function timingRow(conditions: string, runs: readonly Labelled[]): Row {
  const by = new Map<string, number[]>();
  for (const { label, run } of runs) by.set(label, [...(by.get(label) ?? []), ...run.errors]);
  const figures = [...by].map(([label, errors]) => ({ label, figure: rms(errors) }));
  const worst = figures.reduce((a, b) => (b.figure > a.figure ? b : a));
  return {
    what: 'timing error, rms',
    conditions,
    goal: timingGoal,
    measured: `${worst.figure.toFixed(2)} x at worst (${worst.label})`,
    pass: figures.every(({ figure }) => figure <= most),
  };
}

const slowFilter: Filter = { kind: 'lowpass', family: 'butterworth', order: 2, cutoffHz: 200 };

type Case = {
  conditions: string;
  arrangement: Arrangement;
  snrDb: number;
  perPosition: number[];
  positions: (samples: number) => number;
  runs: number;
  filter?: Filter;
  timing: boolean;
};

function* cases(): Generator<Case> {
  for (const arrangement of all) {
    for (const snrDb of [20, 30, 40]) {
      yield {
        conditions: `${arrangement.name}; ${snrDb} dB, 12 to 420 samples a tooth`,
        arrangement,
        snrDb,
        perPosition,
        positions: (samples) => Math.max(250, Math.min(2500, 90_000 / samples)),
        runs: 3,
        timing: arrangement.sensor.kind === 'linear',
      };
    }
  }
  for (const arrangement of [sine, pulses, quadrature, missingOne]) {
    yield {
      conditions: `${arrangement.name}; 20 dB, 2,000 and 8,000 samples a tooth, no filter`,
      arrangement,
      snrDb: 20,
      perPosition: [2000, 8000],
      positions: () => 40,
      runs: 2,
      timing: false,
    };
  }
  for (const snrDb of [20, 12, 6]) {
    yield {
      conditions: `${sine.name}; ${snrDb} dB, 420 samples a tooth, low pass at 4 x the teeth`,
      arrangement: sine,
      snrDb,
      perPosition: [420],
      positions: () => 400,
      runs: 6,
      filter: slowFilter,
      timing: true,
    };
  }
}

export const edgesSection: Section = {
  name: 'edges',
  *run(random, options) {
    for (const one of cases()) {
      if (!isWanted(options, 'edges', 'edges found', 'timing error', one.conditions)) continue;
      const runs: Labelled[] = [];
      for (let k = 0; k < one.runs * options.rounds; k += 1) {
        for (const samples of one.perPosition) {
          const seed = random(`${one.conditions} ${samples} ${k}`);
          const { arrangement, snrDb, filter } = one;
          const positions = one.positions(samples);
          const run = runSteady(arrangement, { samplesPerPosition: samples, positions, snrDb, seed, filter });
          runs.push({ label: `${samples} samples a tooth`, seed, run });
        }
      }
      yield foundRow(one.conditions, runs);
      if (one.timing) yield timingRow(one.conditions, runs);
    }
    // Where a switch wakes between its points, its first edge is no flank.
    for (const arrangement of all.filter(({ sensor }) => sensor.kind === 'linear')) {
      const conditions = `${arrangement.name}; 20 and 40 dB, from rest, 60 to 300 samples a tooth`;
      if (!isWanted(options, 'edges', 'edges found', conditions)) continue;
      const runs: Labelled[] = [];
      for (let k = 0; k < 60 * options.rounds; k += 1) {
        const snrDb = k % 2 === 0 ? 20 : 40;
        const samplesPerPosition = k % 4 < 2 ? 60 : 300;
        const seed = random(`${conditions} ${k}`);
        const run = runFromRest(arrangement, { samplesPerPosition, snrDb, seed });
        runs.push({ label: `${snrDb} dB`, seed, run });
      }
      yield foundRow(conditions, runs);
    }
  },
};
