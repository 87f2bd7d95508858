import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { fitSine, fitSineAndFrequency, fitSineInPhase } from '@/signal/statistics/sine-fit';
import { compareSines, fitSinePair, wrapDeg } from '@/signal/statistics/sine-pair';
import { issueOf, passes, valueOf } from '@/signal/statistics/test-values';
import { toothPhase } from '@/signal/statistics/tooth-phase';
import { normal, sampled, seeded } from '@/signal/test-signals';

const double = (min: number, max: number) => fc.double({ min, max, noNaN: true });

describe('sine fit', () => {
  it('gives back any clean sine, its frequency too', () => {
    fc.assert(
      fc.property(
        double(0.05, 5),
        double(-5, 5),
        double(-3, 3),
        double(12, 90),
        double(-0.8, 0.8),
        (a, c, p, hz, off) => {
          const volts = sampled(400, 1000, (t) => c + a * Math.cos(2 * Math.PI * hz * t + p));
          const known = valueOf(fitSine(volts, 1000, hz));
          expect(Math.abs(known.amplitudeV - a)).toBeLessThan(1e-9);
          expect(Math.abs(known.offsetV - c)).toBeLessThan(1e-9);
          expect(Math.abs(known.phaseRad - p)).toBeLessThan(1e-8);
          const searched = valueOf(fitSineAndFrequency(volts, 1000, hz + off));
          expect(Math.abs(searched.hz - hz)).toBeLessThan(1e-7);
        },
      ),
      { numRuns: 60 },
    );
  });

  it('scatters in phase by sqrt(2 / K) sigma / A, and says so', () => {
    const random = normal(seeded(14));
    const runs = 2000;
    let squares = 0;
    let claimed = 0;
    for (let run = 0; run < runs; run++) {
      const volts = sampled(200, 1000, (t) => Math.cos(2 * Math.PI * 25 * t + 1) + 0.02 * random());
      const { phaseRad, phaseErrorRad } = valueOf(fitSine(volts, 1000, 25));
      squares += (phaseRad - 1) ** 2;
      claimed += phaseErrorRad / runs;
    }
    expect(Math.abs(Math.sqrt(squares / runs) / 0.002 - 1)).toBeLessThan(0.06);
    expect(Math.abs(claimed / 0.002 - 1)).toBeLessThan(0.06);
  });

  it('finds no swing in a constant or in noise', () => {
    const random = normal(seeded(15));
    expect(issueOf(fitSine(new Float64Array(200).fill(2.5), 1000, 25))).toBe('no-swing');
    expect(issueOf(fitSine(new Float64Array(200), 1000, 25))).toBe('no-swing');
    for (let run = 0; run < 500; run++)
      expect(
        issueOf(
          fitSine(
            sampled(200, 1000, () => 2.5 + 0.1 * random()),
            1000,
            25,
          ),
        ),
      ).toBe('no-swing');
  });

  it('refuses a fraction of a cycle, a frequency at half the rate, a start too far away, samples all at one phase', () => {
    const volts = sampled(200, 1000, (t) => Math.cos(2 * Math.PI * 21.3 * t));
    expect(issueOf(fitSine(volts.subarray(0, 60), 1000, 21.3))).toBe('too-few');
    expect(issueOf(fitSine(volts, 1000, 500))).toBe('bad-setting');
    expect(issueOf(fitSine(volts, 1000, 0))).toBe('bad-setting');
    expect(issueOf(fitSineAndFrequency(volts, 1000, 31))).not.toBe(null);
    expect(issueOf(fitSineInPhase(volts, new Float64Array(200).fill(1)))).toBe('undetermined');
    expect(
      issueOf(
        fitSineInPhase(
          volts,
          volts.map((_, k) => 0.001 * k),
        ),
      ),
    ).toBe('undetermined');
    expect(issueOf(fitSineInPhase(volts, [1, 2]))).toBe('bad-setting');
    expect(issueOf(fitSineInPhase([1, 2], [1, 2]))).toBe('too-few');
  });
});

describe('A and B as a pair of sines', () => {
  it('tells gain, offsets and the phase while the speed doubles, by the tooth phase', () => {
    // Twenty teeth of A, from 30 Hz on, 40 Hz/s faster: theta = 30 t + 20 t^2 teeth.
    const teethS = passes(new Array<number>(20).fill(1 / 20), 1, 30 / 20, 40 / 20);
    const theta = (t: number) => 2 * Math.PI * (30 * t + 20 * t * t);
    const aV = sampled(8000, 10_000, (t) => 1.6 + 0.9 * Math.cos(theta(t)));
    const bV = sampled(8000, 10_000, (t) => 1.7 + 0.6 * Math.cos(theta(t) - (97 * Math.PI) / 180));
    const { from, to, psiRad } = valueOf(toothPhase(teethS, 0, 10_000, 8000));
    expect(to - from).toBeGreaterThan(3000);
    const sineOf = (volts: Float64Array) => valueOf(fitSineInPhase(volts.subarray(from, to), psiRad));
    const pair = compareSines(sineOf(aV), sineOf(bV), 'forward');
    expect(pair.gainRatio).toBeCloseTo(1.5, 2);
    expect(pair.a.offsetV).toBeCloseTo(1.6, 2);
    expect(pair.b.offsetV).toBeCloseTo(1.7, 2);
    expect(Math.abs(pair.phaseErrorDeg - 7)).toBeLessThan(0.2);
  });

  it('gives one and the same phase error whichever way the shaft turns', () => {
    fc.assert(
      fc.property(double(-60, 60), double(-3, 3), (errorDeg, start) => {
        const behind = ((90 + errorDeg) * Math.PI) / 180;
        const pairOf = (sense: number) => {
          const volts = (lag: number) =>
            sampled(300, 1000, (t) => 1 + Math.cos(sense * (2 * Math.PI * 20 * t) + start - lag));
          return valueOf(fitSinePair(volts(0), volts(behind), 1000, 20, sense > 0 ? 'forward' : 'reverse'));
        };
        expect(Math.abs(pairOf(1).phaseErrorDeg - errorDeg)).toBeLessThan(1e-6);
        expect(Math.abs(pairOf(-1).phaseErrorDeg - errorDeg)).toBeLessThan(1e-6);
      }),
      { numRuns: 30 },
    );
  });

  it('adds up the errors of both phases and wraps angles above -180 to 180', () => {
    const sine = { amplitudeV: 2, offsetV: 0, residualRmsV: 0, amplitudeErrorV: 0 };
    const pair = compareSines(
      { ...sine, phaseRad: 3, phaseErrorRad: 0.03 },
      { ...sine, phaseRad: -3, phaseErrorRad: 0.04 },
      'reverse',
    );
    expect(pair.phaseDegError).toBeCloseTo((0.05 * 180) / Math.PI, 12);
    expect(pair.phaseDeg).toBeCloseTo((6 * 180) / Math.PI - 360, 10);
    expect([-180, 180, 540, -181, 359].map(wrapDeg)).toEqual([180, 180, 180, 179, -1]);
  });
});
