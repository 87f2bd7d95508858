/**
 * Statistics of edges against values from outside: the source stands beside each; "formula" means that the value was
 * computed from the formula named and nothing else.
 */
import { describe, expect, it } from 'vitest';
import { highestRpmAt } from '@/signal/consequences';
import {
  accelerationNoise,
  accelerations,
  fitAcceleration,
  radPerSPerRpm,
} from '@/signal/statistics/acceleration';
import { cycleToCycleJitter, periodJitter } from '@/signal/statistics/jitter';
import { gateSpeed, lineSpeed, rpmOfCounts } from '@/signal/statistics/least-squares-speed';
import {
  createPitchLearner,
  idealShares,
  learnTurn,
  learntPitch,
  rpmOfShare,
} from '@/signal/statistics/pitch-learning';
import { stateWidths } from '@/signal/statistics/quadrature-phase';
import {
  countResolution,
  edgesInGate,
  gateResolution,
  periodResolution,
} from '@/signal/statistics/speed-resolution';
import { farthest, passes, valueOf } from '@/signal/statistics/test-values';
import { normal, seeded, testRig } from '@/signal/test-signals';

describe('jitter (definitions of JESD65B as repeated by makers of clocks)', () => {
  it('edges 0, 1.00, 2.02, 2.99, 4.01, 5.00, 5.98, 7.01, 8.00 ms: 20.000, 21.381, 60, 50, 38.7298 us (formula)', () => {
    const edges = [0, 1, 2.02, 2.99, 4.01, 5, 5.98, 7.01, 8].map((ms) => ms * 1e-3);
    const { rmsS, sampleRmsS, peakToPeakS } = valueOf(periodJitter(edges));
    const cycles = valueOf(cycleToCycleJitter(edges));
    expect(
      farthest(
        [rmsS, sampleRmsS, peakToPeakS, cycles.mostS, cycles.rmsS].map((s) => s * 1e6),
        [20, 21.381, 60, 50, 38.7298],
      ),
    ).toBeLessThan(1e-3);
  });

  it('white edge noise of 5 us makes 7.0711 us of period and 12.2474 us of cycle-to-cycle jitter (theory)', () => {
    const random = normal(seeded(12));
    const edges = Float64Array.from({ length: 100_001 }, (_, k) => k * 1e-3 + 5e-6 * random());
    expect(Math.abs(valueOf(periodJitter(edges)).rmsS / 7.0711e-6 - 1)).toBeLessThan(0.02);
    expect(Math.abs(valueOf(cycleToCycleJitter(edges)).rmsS / 12.2474e-6 - 1)).toBeLessThan(0.02);
  });
});

describe('ways to take a speed (Ohmae et al. 1982 for the third, formulas)', () => {
  it('60 edges a turn counted for 0.1 s: steps of 10 rpm, 150 counts at 1500 rpm', () => {
    expect(valueOf(countResolution(0.1, 60)).stepRpm).toBe(10);
    expect(valueOf(edgesInGate(1500, 0.1, 60))).toBe(150);
    expect(valueOf(edgesInGate(47.3, 0.1, 60))).toBe(4);
  });

  it('one period by a 1 MHz clock at 1500 rpm: steps of 2.25 rpm, at 50 rpm of 0.0025, at 15 000 of 228', () => {
    const step = (rpm: number) => valueOf(periodResolution(rpm, 60, 1e6, 2)).stepRpm;
    expect(step(1500)).toBeCloseTo(2.25, 2);
    expect(step(50)).toBeCloseTo(0.0025, 5);
    expect(step(15_000)).toBeCloseTo(228, 0);
  });

  it('a gate of 0.1 s from edge to edge at 47.3 rpm: 5 periods, 105 708 ticks of 1 MHz, 47.300110 rpm', () => {
    const edges = Float64Array.from({ length: 12 }, (_, k) => k / 47.3);
    const gate = valueOf(gateSpeed(edges, 0.1, 60));
    expect(gate.periods).toBe(5);
    const ticks = Math.round(gate.gateS * 1e6);
    expect(ticks).toBe(105_708);
    expect(Math.abs(valueOf(rpmOfCounts(gate.periods, ticks, 1e6, 60)) - 47.30011)).toBeLessThan(1e-5);
    expect(gate.rpm).toBeCloseTo(47.3, 10);
    const bound = valueOf(gateResolution(47.3, 60, 1e6, 0.1, 2));
    expect(bound.stepRpm).toBeGreaterThan(47.30011 - 47.3);
    expect(valueOf(gateResolution(1500, 60, 1e6, 0.1, 2)).stepRpm).toBeCloseTo(0.015, 5);
  });

  it('a line through eleven edges of 5 us each: 0.4767 us of period error, 0.7071 us by the ends (formula)', () => {
    const random = normal(seeded(600));
    let squares = 0;
    let ends = 0;
    const runs = 20_000;
    for (let run = 0; run < runs; run++) {
      const edges = Float64Array.from({ length: 11 }, (_, k) => k * 1e-3 + 5e-6 * random());
      squares += (60 / valueOf(lineSpeed(edges, null, 1, 5e-6)).rpm - 1e-3) ** 2;
      ends += ((edges[10]! - edges[0]!) / 10 - 1e-3) ** 2;
    }
    expect(Math.abs(Math.sqrt(squares / runs) / 0.4767e-6 - 1)).toBeLessThan(0.03);
    expect(Math.abs(Math.sqrt(ends / runs) / 0.7071e-6 - 1)).toBeLessThan(0.03);
    const even = Float64Array.from({ length: 11 }, (_, k) => k * 1e-3);
    const { rpm, errorRpm } = valueOf(lineSpeed(even, null, 1, 5e-6));
    expect(Math.abs((errorRpm / rpm) * 1e-3 - 0.4767e-6)).toBeLessThan(1e-3 * 1e-6);
  });

  it('1 rev/min is 0.1047197551 rad/s (NIST SP 811, B.8)', () => {
    expect(Math.abs(radPerSPerRpm - 0.1047197551)).toBeLessThan(1e-10);
  });
});

describe('acceleration', () => {
  it('edges 0, 8.63348, 17.08828, 25.37507 ms of 36 teeth: 50.0 and 50.0 rad/s^2 (formula)', () => {
    const found = valueOf(accelerations([0, 8.63348e-3, 17.08828e-3, 25.37507e-3], (2 * Math.PI) / 36));
    expect(farthest(found, [50, 50])).toBeLessThan(0.05);
  });

  it('teeth of 10 degrees, 1 ms apart, 1 us each: 428 rad/s^2 of noise (formula)', () => {
    expect(accelerationNoise(Math.PI / 18, 1e-3, 1e-6)).toBeCloseTo(428, 0);
  });

  it('a quadratic through six edges is that of numpy 2.4.6 (polyfit and its covariance)', () => {
    const fit = valueOf(fitAcceleration([0, 0.011, 0.0209, 0.0322, 0.0428, 0.0531], Math.PI / 2.5));
    expect(fit.alphaRadPerS2 / 27.652137050300077).toBeCloseTo(1, 6);
    expect(fit.residualRmsRad / 0.04240023243773634).toBeCloseTo(1, 9);
    expect(fit.alphaError / 123.57787286094364).toBeCloseTo(1, 9);
    expect(fit.endRadPerS / 118.87707149170585).toBeCloseTo(1, 9);
  });
});

describe('the wheel itself', () => {
  it('teeth 90.9/89.1/90.3/89.7 degrees apart at 1200 rpm read 1188.12/1212.12/1196.01/1204.01, learnt 1200 (formula)', () => {
    const shares = [90.9, 89.1, 90.3, 89.7].map((deg) => deg / 360);
    const teeth = passes(shares, 30, 20);
    const learner = valueOf(createPitchLearner(valueOf(idealShares(4))));
    for (let turn = 0; turn < 30; turn++) valueOf(learnTurn(learner, teeth.subarray(4 * turn, 4 * turn + 5)));
    const learnt = valueOf(learntPitch(learner));
    expect(learnt.turns).toBe(29);
    const periods = shares.map((_, k) => teeth[k + 1]! - teeth[k]!);
    const raw = periods.map((period) => 60 / (4 * period));
    expect(farthest(raw, [1188.12, 1212.12, 1196.01, 1204.01])).toBeLessThan(0.01);
    const corrected = periods.map((period, k) => valueOf(rpmOfShare(learnt.shares[k]!, period)));
    expect(farthest(corrected, [1200, 1200, 1200, 1200])).toBeLessThan(0.01);
  });

  it('64 pulses at 10 kS/s: 2343.75 rpm for one sample a state, 1171.9 for two, 0.778 of it 20 degrees off (formula)', () => {
    const { wheel } = testRig('quadrature', 64);
    expect(highestRpmAt('quadrature', wheel, 10_000)).toBe(2343.75);
    expect(highestRpmAt('quadrature', wheel, 10_000, 2)).toBeCloseTo(1171.9, 1);
    const { narrowestDeg } = valueOf(stateWidths(110, 0.5, 0.5));
    const highest = highestRpmAt('quadrature', wheel, 10_000, 1, narrowestDeg / 90)!;
    expect(highest / 2343.75).toBeCloseTo(0.778, 3);
  });
});
