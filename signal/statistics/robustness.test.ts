/**
 * Whatever comes in, each statistic answers with a value all of whose numbers are finite, or with an issue; it never throws
 * and never changes its input.
 */
import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Section } from '@/signal/filter-design';
import { accelerations, fitAcceleration } from '@/signal/statistics/acceleration';
import { fieldScale, milliteslaOfSwing, remanenceFactor } from '@/signal/statistics/field';
import { toneOf } from '@/signal/statistics/goertzel';
import type { Outcome } from '@/signal/statistics/issue';
import {
  cycleToCycleJitter,
  periodJitter,
  timeIntervalError,
  withoutTrend,
} from '@/signal/statistics/jitter';
import { leastSquares } from '@/signal/statistics/least-squares';
import { gateSpeed, lineSpeed } from '@/signal/statistics/least-squares-speed';
import { orderSpectrum } from '@/signal/statistics/order-spectrum';
import { matchPattern } from '@/signal/statistics/pattern-match';
import { speedPerTurn } from '@/signal/statistics/per-turn';
import { createPitchLearner, idealShares, learnTurn, withoutPitch } from '@/signal/statistics/pitch-learning';
import { pulseStatistics } from '@/signal/statistics/pulse-statistics';
import { stateWidths } from '@/signal/statistics/quadrature-phase';
import { fitSine, fitSineAndFrequency, fitSineInPhase } from '@/signal/statistics/sine-fit';
import { fitSinePairAndFrequency } from '@/signal/statistics/sine-pair';
import { countResolution, gateResolution, periodResolution } from '@/signal/statistics/speed-resolution';
import { stateLevels } from '@/signal/statistics/state-levels';
import { allFinite, issueOf } from '@/signal/statistics/test-values';
import { toothPhase } from '@/signal/statistics/tooth-phase';
import { findTransitions } from '@/signal/statistics/transitions';
import { classifyWidths } from '@/signal/statistics/width-code';
import { filterZeroPhase } from '@/signal/statistics/zero-phase';

const odd = [0, -0, 1, -1, NaN, Infinity, -Infinity, 1e-300, 5e-324, 3.3, 1e9, 1e15, -1e15, 1e308];
const number = fc.oneof(fc.constantFrom(...odd), fc.double({ min: -1e6, max: 1e6, noNaN: true }));
const column = fc.oneof(
  fc.array(number, { maxLength: 40 }),
  fc.tuple(fc.constantFrom(...odd), fc.nat(40)).map(([value, n]) => new Array<number>(n).fill(value)),
  fc.array(fc.double({ min: -5, max: 5, noNaN: true }), { maxLength: 40 }),
  // Instants that do rise, so that the mathematics behind the first check is reached too.
  fc.array(fc.double({ min: 1e-9, max: 1, noNaN: true }), { maxLength: 40 }).map((steps) =>
    steps.map(
      (
        (t) => (step: number) =>
          (t += step)
      )(0),
    ),
  ),
);
const section: Section = { b0: 0.2, b1: 0.4, b2: 0.2, a1: -0.5, a2: 0.3 };

type Args = { a: number[]; b: number[]; x: number; y: number; z: number; n: number };

const calls: Record<string, (args: Args) => Outcome<unknown>> = {
  stateLevels: ({ a, x, n }) => stateLevels(a, { method: n % 2 ? 'mode' : 'mean', bins: n, noiseV: x }),
  findTransitions: ({ a, x, y, z }) => findTransitions(a, 0, x, { lowV: y, highV: z }),
  findTransitionsOfSwitch: ({ a, x }) => findTransitions(a, 0, x, { lowV: 0, highV: 1 }),
  pulseStatistics: ({ a, n }) =>
    pulseStatistics(
      a,
      Array.from(a, (_, k) => (k + n) % 2),
    ),
  leastSquares: ({ a, b }) =>
    leastSquares([Float64Array.from(b), Float64Array.from(b, () => 1)], a.slice(0, b.length)),
  fitSine: ({ a, x, y }) => fitSine(a, x, y),
  fitSineInPhase: ({ a, b }) => fitSineInPhase(a.slice(0, b.length), b.slice(0, a.length)),
  fitSineAndFrequency: ({ a, n }) => fitSineAndFrequency(a, 40, n),
  fitSinePair: ({ a, b, n }) => fitSinePairAndFrequency(a, b, 40, n, 'forward'),
  toothPhase: ({ a, x, y, n }) => toothPhase(a, x, y, n),
  periodJitter: ({ a }) => periodJitter(a),
  cycleToCycleJitter: ({ a }) => cycleToCycleJitter(a),
  timeIntervalError: ({ a, n }) => timeIntervalError(a, n % 2 ? 'even' : 'drifting'),
  withoutTrend: ({ a }) => withoutTrend(a),
  gateSpeed: ({ a, x, y }) => gateSpeed(a, x, y),
  lineSpeed: ({ a, b, x, y }) => lineSpeed(a, b.length ? b : null, x, y),
  lineSpeedOfEdges: ({ a, y }) => lineSpeed(a, null, 60, y),
  countResolution: ({ x, y }) => countResolution(x, y),
  periodResolution: ({ x, y, z, n }) => periodResolution(x, y, z, n),
  gateResolution: ({ x, y, z, n }) => gateResolution(x, y, z, n, 1),
  accelerations: ({ a, b, x }) => accelerations(a, b.length ? b : x),
  fitAcceleration: ({ a, b, x }) => fitAcceleration(a, b.length ? b : x),
  fitAccelerationOfTeeth: ({ a }) => fitAcceleration(a, 2),
  speedPerTurn: ({ a, n, x }) => speedPerTurn(a, n, x),
  toneOf: ({ a, x, y }) => toneOf(a, x, y),
  orderSpectrum: ({ a, n }) => orderSpectrum(a, n),
  idealShares: ({ x, n }) => idealShares(n, x),
  createPitchLearner: ({ a }) => createPitchLearner(a),
  learnTurn: ({ a, n }) => {
    const learner = createPitchLearner(new Array<number>(Math.max(0, n)).fill(1 / n));
    if (!learner.ok) return learner;
    const first = learnTurn(learner.value, a.slice(0, n + 1));
    return first.ok ? learnTurn(learner.value, a.slice(n, 2 * n + 1)) : first;
  },
  withoutPitch: ({ a, b, n }) => withoutPitch(a, b, b, n),
  matchPattern: ({ a, b, x }) => matchPattern(a, b, x),
  matchItself: ({ a }) => matchPattern(a, a, 0),
  stateWidths: ({ x, y, z }) => stateWidths(x, y, z),
  classifyWidths: ({ a, b, x, y, z }) =>
    classifyWidths(
      a,
      b,
      [
        { widthS: y, means: 'forward' },
        { widthS: z, means: 'weak' },
      ],
      x,
    ),
  field: ({ x, y, z }) =>
    fieldScale({ sensitivityMvPerMt: x, nominalSupplyV: y, supplyV: z, quiescentV: null }),
  remanenceFactor: ({ x, y }) => remanenceFactor(x, y),
  filterZeroPhase: ({ a }) => filterZeroPhase(a, [section]),
  filterZeroPhaseOfAny: ({ a, x, y }) => filterZeroPhase(a, [{ ...section, a1: x, a2: y }]),
};

describe('any input', () => {
  it.each(Object.entries(calls))('%s: finite numbers or an issue', (_name, call) => {
    fc.assert(
      fc.property(
        fc.record({
          a: column,
          b: column,
          x: number,
          y: number,
          z: number,
          n: fc.integer({ min: -1, max: 12 }),
        }),
        (args) => {
          const before = JSON.stringify([args.a, args.b]);
          const outcome = call(args);
          expect(JSON.stringify([args.a, args.b])).toBe(before);
          if (!outcome.ok) expect(outcome.issue.detail.length).toBeGreaterThan(0);
          else if (!allFinite(outcome.value)) throw new Error(JSON.stringify(outcome.value));
        },
      ),
      { numRuns: 300 },
    );
  });

  it('refuses empty columns everywhere, but for a filter, which has nothing to do', () => {
    const empty: Args = { a: [], b: [], x: 1, y: 1, z: 1, n: 4 };
    const withoutColumns =
      /Resolution|idealShares|stateWidths|field|remanence|filterZeroPhase|classifyWidths|findTransitions/;
    for (const [name, call] of Object.entries(calls)) {
      if (!withoutColumns.test(name)) expect([name, issueOf(call(empty))]).not.toEqual([name, null]);
    }
  });

  it('reads millitesla only from a scale, which cannot be made of a sensitivity of 0', () => {
    const sensor = { sensitivityMvPerMt: 0, nominalSupplyV: null, supplyV: 5, quiescentV: null };
    expect(issueOf(fieldScale(sensor))).toBe('bad-setting');
    const scale = fieldScale({ ...sensor, sensitivityMvPerMt: -50 });
    expect(scale.ok && milliteslaOfSwing(0.5, scale.value)).toBe(10);
  });
});
