/**
 * A small part of `npm run accuracy` with seeds that stay: the signal path with its fitted band against rigs of known truth.
 * The goals are those of the table.
 */
import { describe, expect, it } from 'vitest';
import type { SpeedMethod } from '@/signal/model';
import { boundRun } from '@/tests/accuracy/bound-section';
import { directionCases, runScene } from '@/tests/accuracy/direction-section';
import { runSteady } from '@/tests/accuracy/edges';
import { ramping, steady } from '@/tests/accuracy/motions';
import { arrangements } from '@/tests/accuracy/rigs';
import { runBench } from '@/tests/accuracy/run';
import { honest, judgeSpeeds } from '@/tests/accuracy/speed';
import { speedBench, turnFigure } from '@/tests/accuracy/speed-section';
import { rms } from '@/tests/accuracy/statistics';

const { sine, few, pulses, switched, quadrature, threeHall, missingTwo, missingOne } = arrangements;
const seed = 20_250_611;

describe('edges', () => {
  for (const arrangement of [sine, pulses, quadrature, threeHall, missingTwo, missingOne]) {
    it(`${arrangement.name}: each found once, at its instant`, () => {
      for (const snrDb of [20, 40]) {
        for (const samplesPerPosition of [12, 60, 300]) {
          const positions = Math.min(1000, 30_000 / samplesPerPosition);
          const run = runSteady(arrangement, { samplesPerPosition, positions, snrDb, seed });
          const where = { snrDb, samplesPerPosition };
          expect({ ...where, missed: run.due - run.found, extra: run.extra }).toEqual({
            ...where,
            missed: 0,
            extra: 0,
          });
          expect(run.errors.length).toBeGreaterThan(100);
          expect(rms(run.errors)).toBeLessThanOrEqual(1.5);
        }
      }
    });
  }

  it(`${switched.name}: each found once`, () => {
    const run = runSteady(switched, { samplesPerPosition: 60, positions: 400, snrDb: 30, seed });
    expect({ missed: run.due - run.found, extra: run.extra }).toEqual({ missed: 0, extra: 0 });
  });

  it('a flank of thousands of samples is not too slow at 20 dB', () => {
    const run = runSteady(sine, { samplesPerPosition: 3000, positions: 30, snrDb: 20, seed });
    expect({ missed: run.due - run.found, extra: run.extra }).toEqual({ missed: 0, extra: 0 });
    expect(run.due).toBeGreaterThan(50);
  });

  it('a low pass brings back at 6 dB what the noise hides', () => {
    const filter = { kind: 'lowpass', family: 'butterworth', order: 2, cutoffHz: 200 } as const;
    const run = runSteady(sine, { samplesPerPosition: 420, positions: 250, snrDb: 6, seed, filter });
    expect({ missed: run.due - run.found, extra: run.extra }).toEqual({ missed: 0, extra: 0 });
    expect(rms(run.errors)).toBeLessThanOrEqual(1.5);
  });
});

describe('speed', () => {
  const cases = [few, quadrature, missingTwo];
  for (const arrangement of cases) {
    it(`${arrangement.name}: whole turns within the bound, and as good as they say, uneven teeth or not`, () => {
      for (const motion of [steady, ramping]) {
        for (const uneven of [false, true]) {
          const bench = speedBench({ arrangement, method: 'turn', snrDb: 20, uneven, seed }, 20, motion);
          const judged = judgeSpeeds(bench, runBench(bench, 4));
          expect(judged.baseless).toBe(0);
          expect(turnFigure(bench, judged)).toBeLessThanOrEqual(1);
          const whole = judged.speeds.filter(({ isFirstTurn }) => !isFirstTurn);
          expect(whole.length).toBeGreaterThan(1000);
          expect(honest(whole) / whole.length).toBeGreaterThanOrEqual(0.95);
        }
      }
    });
  }

  for (const method of ['tooth', 'window'] satisfies SpeedMethod[]) {
    it(`by ${method}, even teeth: as good as it says`, () => {
      for (const snrDb of [20, 40]) {
        const bench = speedBench({ arrangement: sine, method, snrDb, uneven: false, seed }, 24, ramping);
        const { speeds, baseless } = judgeSpeeds(bench, runBench(bench, 4));
        expect(baseless).toBe(0);
        expect(speeds.length).toBeGreaterThan(1000);
        expect(honest(speeds) / speeds.length).toBeGreaterThanOrEqual(0.95);
      }
    });
  }
});

describe('direction', () => {
  const [reversals, , longWays] = directionCases.scenes;
  for (const ring of directionCases.rings) {
    it(`${ring.arrangement.name}: the net count is exact, a reversal known within a cycle`, () => {
      for (const scene of [reversals!, longWays!]) {
        for (const samplesPerCycle of [20, 150, 1000]) {
          const run = runScene(ring, scene, samplesPerCycle, 20, seed);
          expect(run.countError).toBeCloseTo(0, 9);
          expect(run.reversals).toBeGreaterThan(0);
          expect(run.longestWay).toBeLessThanOrEqual(1);
          expect(run.wrong).toBe(0);
        }
      }
    });
  }
});

describe('what silence proves', () => {
  it('the bound never falls below the true speed as the shaft stops, and goes down to next to nothing', () => {
    for (const arrangement of [sine, pulses]) {
      for (const slowS of [0.02, 0.3, 1.2]) {
        const run = boundRun(arrangement, slowS, 0, 1, seed);
        expect(run.looks).toBeGreaterThan(400);
        expect(run.below).toBe(0);
        expect(run.rises).toBe(0);
        expect(run.endShare).toBeLessThan(0.05);
      }
    }
    for (const arrangement of [quadrature, missingTwo])
      expect(boundRun(arrangement, 0.3, 0, 1, seed).below).toBe(0);
  });
});
