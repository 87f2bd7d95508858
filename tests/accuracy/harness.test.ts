/** The measure itself: a wrong edge, a wrong speed and a wrong word are seen as such. */
import { describe, expect, it } from 'vitest';
import { optionsOf } from '@/tests/accuracy/arguments';
import { noiseOverSlope } from '@/tests/accuracy/edges';
import { matchEdges, passesOf } from '@/tests/accuracy/match';
import { steady } from '@/tests/accuracy/motions';
import { move, programmeOf, stand } from '@/tests/accuracy/moves';
import { arrangements, createBench, rpmFor } from '@/tests/accuracy/rigs';
import type { RunResult } from '@/tests/accuracy/run';
import { seedFor } from '@/tests/accuracy/seeds';
import { honest, judgeSpeeds, leastSquaresBound } from '@/tests/accuracy/speed';
import { createMotion } from '@/simulator/motion';

const { sine, missingOne } = arrangements;
const rpm = rpmFor(sine, 40);
const bench = createBench(sine, { motion: steady(rpm), snrDb: 20, seed: 3 });
const trueFlanks = (endS: number) =>
  passesOf(bench, 0, 0, endS).map(({ tS, rising }) => ({ midT: tS, rising }));

describe('edges against flanks', () => {
  it('finds all of the true ones, and no other', () => {
    const match = matchEdges(bench, 0, trueFlanks(0.5), 0.5);
    expect(match).toMatchObject({ found: match.due, extra: 0 });
    expect(match.due).toBeGreaterThan(480);
  });

  it('sees one that is missed, one too many, and one of the wrong polarity', () => {
    const flanks = trueFlanks(0.5);
    const [a, b, c] = [flanks[50]!, flanks[80]!, flanks[120]!];
    const changed = flanks.flatMap((flank) => {
      if (flank === a) return [];
      if (flank === b) return [flank, { ...flank, midT: flank.midT + 1e-5 }];
      return flank === c ? [{ ...flank, rising: !flank.rising }] : [flank];
    });
    const match = matchEdges(bench, 0, changed, 0.5);
    expect(match.due - match.found).toBe(2);
    expect(match.extra).toBe(2);
  });
});

describe('speeds against the true mean', () => {
  const flanks = [trueFlanks(0.5)];
  const rises = flanks[0]!.filter(({ rising }) => rising);
  const run = (speed: RunResult['speed']): RunResult => ({
    endS: 0.5,
    flanks,
    speed: [{ t: 0, rpm: NaN, errorRpm: NaN }, ...speed],
    directions: [],
    status: {} as RunResult['status'],
  });

  it('takes the stretch of a whole turn, and less of it after a start', () => {
    const said = [rises[1]!, rises[24]!, rises[60]!].map(({ midT }) => ({
      t: midT,
      rpm: 1.01 * rpm,
      errorRpm: 0.006 * rpm,
    }));
    const { speeds, baseless } = judgeSpeeds(bench, run(said));
    expect(baseless).toBe(0);
    expect(speeds.map(({ positions, isFirstTurn }) => [positions, isFirstTurn])).toEqual([
      [1, true],
      [24, true],
      [24, false],
    ]);
    for (const { trueRpm } of speeds) expect(trueRpm).toBeCloseTo(rpm, 6);
    expect(honest(speeds)).toBe(3);
    expect(honest(speeds.map((speed) => ({ ...speed, errorRpm: 0.004 * rpm })))).toBe(0);
    expect(honest(speeds.map((speed) => ({ ...speed, errorRpm: NaN })))).toBe(0);
  });

  it('counts a speed that no tooth made', () => {
    const strange = { midT: rises[10]!.midT + 0.4 / (rpm / 60) / 24, rising: true };
    const result = {
      ...run([{ t: strange.midT, rpm, errorRpm: rpm }]),
      flanks: [[...rises.slice(0, 11), strange]],
    };
    expect(judgeSpeeds(bench, result)).toMatchObject({ speeds: [], baseless: 1 });
  });
});

describe('measures', () => {
  it('a sine at 20 dB: noise over slope is 1 / (10 sqrt 2 2 pi) of a period', () => {
    expect(noiseOverSlope(bench, undefined, NaN)).toBeCloseTo(1 / (10 * Math.SQRT2 * 2 * Math.PI), 4);
    expect(bench.ideal.rmsV).toBeCloseTo(bench.ideal.swingV / 2 / Math.SQRT2, 4);
  });

  it('least squares: 0.477 us for ten intervals of edges known to 5 us', () => {
    expect(5 * leastSquaresBound(1, 10)).toBeCloseTo(0.477, 3);
  });

  it('a wheel with a missing tooth has no flank there', () => {
    const gapped = createBench(missingOne, { motion: steady(60), snrDb: 20, seed: 1 });
    expect(passesOf(gapped, 0, 0, 1)).toHaveLength(70);
  });

  it('moves go as far as they say', () => {
    const { motion, stretches, endS } = programmeOf(
      [stand(0.1), move(5.25, 100, 0.02), move(-0.3, 100, 0.02)],
      16,
    );
    const { turnsAt } = createMotion(motion);
    for (const { toS, to } of stretches) expect(16 * turnsAt(toS)).toBeCloseTo(to, 9);
    expect(16 * turnsAt(endS + 1)).toBeCloseTo(4.95, 9);
  });
});

describe('arguments', () => {
  it('takes what it knows', () => {
    expect(optionsOf(['--seed', '7', '--only', 'Speed'])).toEqual({
      ok: true,
      value: { seed: 7, rounds: 1, only: 'speed' },
    });
  });

  it('refuses the rest', () => {
    for (const args of [
      ['--seed', '-1'],
      ['--seed'],
      ['--rounds', '0'],
      ['--only'],
      ['twice'],
      ['--seed', '2147483648'],
    ])
      expect(optionsOf(args).ok).toBe(false);
  });

  it('seeds follow from run, section and label', () => {
    expect(seedFor(1, 'edges', 'a')).toBe(seedFor(1, 'edges', 'a'));
    const others = [seedFor(2, 'edges', 'a'), seedFor(1, 'speed', 'a'), seedFor(1, 'edges', 'b')];
    expect(new Set([seedFor(1, 'edges', 'a'), ...others]).size).toBe(4);
  });
});
