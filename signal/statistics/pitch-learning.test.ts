import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { periodJitter } from '@/signal/statistics/jitter';
import { matchPattern } from '@/signal/statistics/pattern-match';
import {
  breakPitch,
  createPitchLearner,
  createPitchLearners,
  idealShares,
  learnTurn,
  learntPitch,
  rpmOfShare,
  withoutPitch,
  type PitchLearner,
} from '@/signal/statistics/pitch-learning';
import { farthest, issueOf, passes, valueOf } from '@/signal/statistics/test-values';
import { normal, seeded } from '@/signal/test-signals';

/** Shares of `n` teeth, each off its place by up to `off` of a pitch. */
function uneven(n: number, off: number, seed: number): number[] {
  const random = seeded(seed);
  const raw = Array.from({ length: n }, () => 1 + off * (2 * random() - 1));
  const sum = raw.reduce((a, b) => a + b, 0);
  return raw.map((share) => share / sum);
}

function feed(learner: PitchLearner, teethS: Float64Array): (string | null)[] {
  const n = learner.nominal.length;
  const issues: (string | null)[] = [];
  for (let at = 0; at + n < teethS.length; at += n)
    issues.push(issueOf(learnTurn(learner, teethS.subarray(at, at + n + 1))));
  return issues;
}

const learnerOf = (positions: number, missing = 0) =>
  valueOf(createPitchLearner(valueOf(idealShares(positions, missing))));

describe('pitch learning', () => {
  it('gives the spacing back at any steady speed or even acceleration', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 2, max: 60 }),
        fc.integer(),
        fc.double({ min: 5, max: 100, noNaN: true }),
        fc.double({ min: -1, max: 2, noNaN: true }),
        (n, seed, revPerS, ramp) => {
          const shares = uneven(n, 0.045, seed);
          // At most 0.08 % a tooth, and a third of the speed lost over the record.
          const learner = learnerOf(n);
          const teeth = passes(shares, 25, revPerS, ramp * revPerS * revPerS * Math.min(0.01, 4e-4 * n));
          expect(feed(learner, teeth).every((issue) => issue === null)).toBe(true);
          expect(farthest(valueOf(learntPitch(learner)).shares, shares)).toBeLessThan(1e-9);
        },
      ),
      { numRuns: 40 },
    );
  });

  it('learns a gap as it is, and accepts it though it is no pitch', () => {
    const ideal = valueOf(idealShares(60, 2));
    expect(ideal).toHaveLength(58);
    expect(ideal[57]).toBeCloseTo(3 / 60, 12);
    const shares = ideal.map((share, k) => (k === 57 ? share + 0.003 : k === 3 ? share - 0.001 : share));
    shares[10] = shares[10]! - 0.001;
    shares[20] = shares[20]! - 0.001;
    const learner = learnerOf(60, 2);
    feed(learner, passes(shares, 22, 30));
    expect(farthest(valueOf(learntPitch(learner)).shares, shares)).toBeLessThan(1e-9);
  });

  it('learns nothing from turns that are not steady, nor across a break', () => {
    const learner = learnerOf(8);
    const shares = new Array<number>(8).fill(1 / 8);
    const issues = feed(learner, passes(shares, 10, 10, 40));
    expect(issues[0]).toBe(null);
    expect(issues[1]).toBe('not-steady');
    expect(learner.turns).toBe(issues.filter((issue) => issue === null).length - 1);
    const steady = learnerOf(8);
    const turn = passes(shares, 1, 10);
    expect(valueOf(learnTurn(steady, turn))).toBe(null);
    breakPitch(steady);
    expect(
      valueOf(
        learnTurn(
          steady,
          turn.map((t) => t + turn[8]!),
        ),
      ),
    ).toBe(null);
    expect(
      valueOf(
        learnTurn(
          steady,
          turn.map((t) => t + 5),
        ),
      ),
    ).toBe(null);
    expect(steady.turns).toBe(0);
  });

  it('accepts only after 20 turns, with little scatter and no tooth a tenth off', () => {
    const few = learnerOf(4);
    feed(few, passes([0.25, 0.25, 0.25, 0.25], 20, 10));
    expect(issueOf(learntPitch(few))).toBe('too-few');
    const bad = learnerOf(4);
    feed(bad, passes([0.28, 0.22, 0.25, 0.25], 30, 10));
    expect(issueOf(learntPitch(bad))).toBe('not-stable');
    const random = normal(seeded(4));
    const shaky = learnerOf(4);
    feed(
      shaky,
      passes([0.25, 0.25, 0.25, 0.25], 60, 10).map((t) => t + 1e-4 * random()),
    );
    expect(issueOf(learntPitch(shaky))).toBe('not-stable');
    const calm = learnerOf(4);
    feed(
      calm,
      passes([0.25, 0.25, 0.25, 0.25], 60, 10).map((t) => t + 2e-5 * random()),
    );
    expect(valueOf(learntPitch(calm)).scatter.every((share) => share > 1e-5)).toBe(true);
  });

  it('keeps each direction its own, the reverse in the order in which teeth pass', () => {
    const { forward, reverse } = valueOf(createPitchLearners(valueOf(idealShares(12, 1))));
    expect([...reverse.nominal]).toEqual([...forward.nominal].reverse());
    const shares = uneven(4, 0.05, 2);
    const both = valueOf(createPitchLearners([0.25, 0.25, 0.25, 0.25]));
    feed(both.forward, passes(shares, 25, 10));
    feed(both.reverse, passes([...shares].reverse(), 25, 10));
    expect(farthest(valueOf(learntPitch(both.reverse)).shares, [...shares].reverse())).toBeLessThan(1e-9);
  });

  it('taken out, leaves even edges, wherever they begin', () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 6 }), fc.integer(), (first, seed) => {
        const shares = uneven(7, 0.09, seed);
        const teeth = passes(shares, 6, 12).subarray(first, 40);
        const even = new Array<number>(7).fill(1 / 7);
        expect(valueOf(periodJitter(teeth)).rmsS).toBeGreaterThan(1e-5);
        const flat = valueOf(withoutPitch(teeth, shares, even, first));
        expect(valueOf(periodJitter(flat)).rmsS).toBeLessThan(1e-12);
      }),
    );
  });

  it('refuses what no wheel is', () => {
    expect(issueOf(idealShares(0))).toBe('bad-setting');
    expect(issueOf(idealShares(4, 4))).toBe('bad-setting');
    expect(issueOf(createPitchLearner([1]))).toBe('bad-setting');
    expect(issueOf(createPitchLearner([0.5, 0.6]))).toBe('bad-setting');
    expect(issueOf(createPitchLearner([1.5, -0.5]))).toBe('bad-setting');
    expect(issueOf(learnTurn(learnerOf(4), [0, 1, 2]))).toBe('bad-setting');
    expect(issueOf(learnTurn(learnerOf(4), [0, 1, 2, 2, 4]))).toBe('not-ascending');
    expect(issueOf(rpmOfShare(0.25, 0))).toBe('bad-setting');
    expect(issueOf(withoutPitch([0, 1], [0.5, 0.5], [0.5, 0.5], 2))).toBe('bad-setting');
  });
});

describe('place of an unmarked wheel', () => {
  it('finds any shift of any pattern, through noise that it is told of', () => {
    fc.assert(
      fc.property(fc.integer({ min: 5, max: 60 }), fc.nat(59), fc.integer(), (n, shift, seed) => {
        const stored = uneven(n, 0.05, seed);
        const random = normal(seeded(seed + 1));
        const scatter = 0.0005 / n;
        const latest = stored.map((_, k) => stored[(k + shift) % n]! + scatter * random());
        const found = matchPattern(latest, stored, scatter);
        // A pattern that repeats by chance is said to be ambiguous, and is then never guessed.
        if (found.ok) expect(found.value.shift).toBe(shift % n);
        else expect(issueOf(found)).toBe('ambiguous');
      }),
    );
    const stored = uneven(20, 0.05, 77);
    const latest = stored.map((_, k) => stored[(k + 13) % 20]!);
    const { shift, correlation } = valueOf(matchPattern(latest, stored, 1e-5));
    expect(shift).toBe(13);
    expect(correlation).toBeCloseTo(1, 9);
  });

  it('does not guess on an even wheel, on a pattern that repeats, on noise as large as itself, on another wheel', () => {
    const twice = [...uneven(6, 0.05, 1), ...uneven(6, 0.05, 1)];
    expect(issueOf(matchPattern(new Array<number>(12).fill(1 / 12), twice, 0))).toBe('no-match');
    expect(issueOf(matchPattern(twice, new Array<number>(12).fill(1 / 12), 0))).toBe('no-match');
    expect(issueOf(matchPattern(twice, twice, 0))).toBe('ambiguous');
    const stored = uneven(12, 0.001, 5);
    expect(issueOf(matchPattern(stored, stored, 0.001 / 12))).toBe('ambiguous');
    expect(issueOf(matchPattern([0.2, 0.3, 0.25, 0.25], [0.25, 0.25, 0.25], 0))).toBe('bad-setting');
    const lone = Array.from({ length: 60 }, (_, k) => (k === 0 ? 1.06 : 1));
    const wavy = Array.from({ length: 60 }, (_, k) => 1 + 0.03 * Math.cos((2 * Math.PI * k) / 60));
    expect(issueOf(matchPattern(lone, wavy, 1e-4))).toBe('no-match');
  });
});
