/**
 * Waveform statistics against values from outside: the source stands beside each; "formula" means that the value was
 * computed from the formula named and nothing else.
 */
import { describe, expect, it } from 'vitest';
import { designFilter } from '@/signal/filter-design';
import { fieldScale, mvPerMtOfMvPerGauss, remanenceFactor, voltsOf } from '@/signal/statistics/field';
import { toneOf } from '@/signal/statistics/goertzel';
import { orderSpectrum } from '@/signal/statistics/order-spectrum';
import { pulseStatistics } from '@/signal/statistics/pulse-statistics';
import { fitSineAndFrequency } from '@/signal/statistics/sine-fit';
import { fitSinePair, fitSinePairAndFrequency } from '@/signal/statistics/sine-pair';
import { stateLevels } from '@/signal/statistics/state-levels';
import { allFinite, farthest, valueOf } from '@/signal/statistics/test-values';
import { findTransitions } from '@/signal/statistics/transitions';
import { filterZeroPhase } from '@/signal/statistics/zero-phase';
import { sampled } from '@/signal/test-signals';

const degPerRad = 180 / Math.PI;

describe('state levels (the tests of octave-signal for statelevels, an open signal toolbox)', () => {
  const volts = Float64Array.from({ length: 100 }, (_, k) => {
    const t = (20 * Math.PI * k) / 99;
    return (t % (2 * Math.PI) < Math.PI ? 1 : -1) + Math.cos(t);
  });

  it('mode of 100 bins: -1.9795 and 1.9800; bins 1, 2, 4, 11 hold 4, 2, 1, 0 of 100 samples', () => {
    const { lowV, highV, histogram } = valueOf(stateLevels(volts, { method: 'mode', bins: 100 }));
    expect(Math.abs(lowV + 1.9795)).toBeLessThan(1e-4);
    expect(Math.abs(highV - 1.98)).toBeLessThan(1e-4);
    expect([1, 2, 4, 11].map((bin) => histogram[bin - 1])).toEqual([4, 2, 1, 0]);
    expect(histogram.reduce((sum, count) => sum + count, 0)).toBe(100);
  });

  it('mode of 50 bins: -1.9595 and 1.9600', () => {
    const { lowV, highV } = valueOf(stateLevels(volts, { method: 'mode', bins: 50 }));
    expect(Math.abs(lowV + 1.9595)).toBeLessThan(1e-4);
    expect(Math.abs(highV - 1.96)).toBeLessThan(1e-4);
  });

  it('mean of 100 bins: -1.0090 and 0.9532', () => {
    const { lowV, highV } = valueOf(stateLevels(volts, { method: 'mean', bins: 100 }));
    expect(Math.abs(lowV + 1.009)).toBeLessThan(1e-4);
    expect(Math.abs(highV - 0.9532)).toBeLessThan(1e-4);
  });
});

describe('transitions and pulses (terms of IEEE Std 181)', () => {
  it('a ramp of 1 to 4 V from 10 ms on, 8 ms long: 10.8, 14.0 and 17.2 ms, duration 6.4 ms (formula)', () => {
    const volts = sampled(40, 1000, (t) => Math.min(4, Math.max(1, 1 + ((t - 0.01) / 0.008) * 3)));
    const { transitions } = valueOf(findTransitions(volts, 0, 1000, { lowV: 1, highV: 4 }));
    expect(transitions).toHaveLength(1);
    const { t10S, t50S, t90S, durationS } = transitions[0]!;
    expect(farthest([t10S, t50S, t90S, durationS], [0.0108, 0.014, 0.0172, 0.0064])).toBeLessThan(1e-9);
  });

  it('a trapezoid of 10 ms, rise 2 to 3, fall 7 to 8 ms: duration 5.0, period 10, duty 0.5, transitions 0.8 ms (formula)', () => {
    const volts = sampled(400, 10_000, (t) => {
      const ms = (t * 1000) % 10;
      return 5 * Math.max(0, Math.min(1, ms - 2, 8 - ms));
    });
    const { transitions } = valueOf(findTransitions(volts, 0, 10_000, { lowV: 0, highV: 5 }));
    expect(transitions).toHaveLength(8);
    for (const { durationS } of transitions) expect(Math.abs(durationS - 0.8e-3)).toBeLessThan(1e-6);
    const pulses = valueOf(
      pulseStatistics(
        transitions.map(({ t50S }) => t50S),
        transitions.map(({ rising }) => rising),
      ),
    );
    const { duration, separation, period, duty } = pulses;
    expect(farthest([duration.mean, separation.mean, period.mean], [5e-3, 5e-3, 10e-3])).toBeLessThan(1e-6);
    expect(Math.abs(duty.mean - 0.5)).toBeLessThan(1e-6);
  });

  it('an RC step lasts ln 9 RC = 2.197225 RC (textbook)', () => {
    const rcS = 1e-3;
    const volts = sampled(22_000, 1e6, (t) => (t < 1e-3 ? 0 : 1 - Math.exp(-(t - 1e-3) / rcS)));
    const { transitions } = valueOf(findTransitions(volts, 0, 1e6, { lowV: 0, highV: 1 }));
    expect(transitions).toHaveLength(1);
    expect(Math.abs(transitions[0]!.durationS / rcS - 2.197225)).toBeLessThan(1e-6);
  });

  it('a second-order step of damping 0.5 overshoots by 16.3034 % (textbook, exp(-pi zeta / sqrt(1 - zeta^2)))', () => {
    const damped = Math.sqrt(0.75);
    const volts = sampled(30_000, 1000, (t) =>
      t < 1
        ? 0
        : 1 -
          Math.exp(-(t - 1) / 2) * (Math.cos(damped * (t - 1)) + (0.5 / damped) * Math.sin(damped * (t - 1))),
    );
    const { transitions } = valueOf(findTransitions(volts, 0, 1000, { lowV: 0, highV: 1 }));
    expect(Math.abs(transitions[0]!.overshootPct - 16.3034)).toBeLessThan(1e-3);
  });

  it('a sine cut a fifth of its amplitude above the middle has a duty of 0.435906 (formula 0.5 - asin(c/A)/pi)', () => {
    const hz = 100;
    const up = Math.asin(0.2) / (2 * Math.PI * hz);
    const edges = Float64Array.from(
      { length: 21 },
      (_, k) => Math.floor(k / 2) / hz + (k % 2 ? 0.5 / hz - up : up),
    );
    const { duty, overallDuty } = valueOf(
      pulseStatistics(
        edges,
        Array.from(edges, (_, k) => k % 2 === 0),
      ),
    );
    expect(Math.abs(duty.mean - 0.435906)).toBeLessThan(1e-5);
    expect(Math.abs(overallDuty - 0.435906)).toBeLessThan(1e-5);
  });
});

describe('sine fits (model of IEEE Std 1057, formula)', () => {
  const phaseB = 0.4 - 83 / degPerRad;
  const aV = sampled(200, 1000, (t) => 2.5 + 0.8 * Math.cos(2 * Math.PI * 21.3 * t + 0.4));
  const bV = sampled(200, 1000, (t) => 2.45 + 0.72 * Math.cos(2 * Math.PI * 21.3 * t + phaseB));

  it('three parameters: 0.8 and 0.72 V about 2.50 and 2.45 V, phases 22.9183 and -60.0817, apart 83.000 degrees', () => {
    const { a, b, phaseDeg, phaseErrorDeg, gainRatio } = valueOf(fitSinePair(aV, bV, 1000, 21.3, 'forward'));
    const found = [a.amplitudeV, b.amplitudeV, a.offsetV, b.offsetV, phaseDeg, phaseErrorDeg, gainRatio];
    expect(farthest(found, [0.8, 0.72, 2.5, 2.45, 83, -7, 0.8 / 0.72])).toBeLessThan(1e-9);
    expect(Math.abs(a.phaseRad * degPerRad - 22.9183)).toBeLessThan(1e-4);
    expect(Math.abs(b.phaseRad * degPerRad + 60.0817)).toBeLessThan(1e-4);
  });

  it('four parameters from 20.8 Hz: 21.3 Hz in 8 rounds at most', () => {
    const fit = valueOf(fitSineAndFrequency(aV, 1000, 20.8));
    expect(Math.abs(fit.hz - 21.3)).toBeLessThan(1e-9);
    expect(fit.iterations).toBeLessThanOrEqual(8);
    const pair = valueOf(fitSinePairAndFrequency(aV, bV, 1000, 20.8, 'forward'));
    expect(Math.abs(pair.a.hz - 21.3)).toBeLessThan(1e-9);
    expect(pair.b.hz).toBe(pair.a.hz);
    expect(Math.abs(pair.phaseDeg - 83)).toBeLessThan(1e-7);
  });
});

it('0.05 V of 50 Hz within 1 V of 120 Hz reads 0.0500 V from 200 samples at 1 kS/s (formula)', () => {
  const volts = sampled(
    200,
    1000,
    (t) => 0.05 * Math.sin(2 * Math.PI * 50 * t) + Math.sin(2 * Math.PI * 120 * t),
  );
  expect(Math.abs(valueOf(toneOf(volts, 1000, 50)).amplitude - 0.05)).toBeLessThan(1e-6);
});

it('orders of eight positions are those of numpy 2.4.6 (numpy.fft.rfft)', () => {
  const { amplitude, phaseRad, mean } = valueOf(orderSpectrum([3.1, 2.7, 3.4, 2.9, 3.8, 2.2, 3.0, 3.3], 8));
  const magnitudes = [24.4, 0.47498841901658395, 1.392838827718411, 1.3763669575371695, 2.200000000000001];
  const phases = [0, -1.7051059721766237, 1.2036224929766772, 2.900004152559663, 0];
  expect(
    farthest(
      amplitude,
      magnitudes.map((m, r) => (r === 0 || r === 4 ? m : 2 * m) / 8),
    ),
  ).toBeLessThan(1e-12);
  expect(farthest(phaseRad, phases)).toBeLessThan(1e-12);
  expect(mean).toBeCloseTo(3.05, 12);
});

describe('field of a linear sensor (notes of Hall sensor makers)', () => {
  it('25 mV/mT at 5 V nominal, on 4.75 V, puts out 3.325 V at +40 mT', () => {
    const scale = valueOf(
      fieldScale({ sensitivityMvPerMt: 25, nominalSupplyV: 5, supplyV: 4.75, quiescentV: null }),
    );
    expect(Math.abs(voltsOf(40, scale) - 3.325)).toBeLessThan(1e-9);
  });

  it('2.5 mV/G is 25 mV/mT (1 T = 10 000 G)', () => {
    expect(mvPerMtOfMvPerGauss(2.5)).toBe(25);
  });

  it('neodymium, -0.11 % a kelvin, keeps 0.934 of its remanence 60 K up', () => {
    expect(valueOf(remanenceFactor(-0.11, 60))).toBe(0.934);
  });
});

describe('forward and backward against scipy 1.17.1 (sosfiltfilt, odd extension)', () => {
  const x = Float64Array.from(
    { length: 60 },
    (_, k) => 2.5 + 0.8 * Math.cos(2 * Math.PI * 0.035 * k + 0.4) + (0.3 * (((k * 7) % 11) - 5)) / 5,
  );
  const at = [0, 1, 5, 20, 31, 47, 58, 59];
  it.each([
    [
      { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 100 } as const,
      21,
      [
        2.937210764463993, 2.9797631884559523, 2.6561420918477063, 2.5175189047177615, 2.9257739712072093,
        2.3319929693555426, 3.1720793346852627, 3.1135090310321645,
      ],
    ],
    [
      { kind: 'highpass', family: 'butterworth', order: 2, cutoffHz: 20 } as const,
      30,
      [
        -0.0208865080133942, 0.37232598805485567, -0.2968677002152716, 0.3063812873968468, 0.6904922901456532,
        0.07224509540732926, 0.33887180304455006, -0.07643112840485439,
      ],
    ],
    [
      { kind: 'lowpass', family: 'bessel', order: 4, cutoffHz: 80 } as const,
      40,
      [
        2.9368487950513407, 2.9297880564537855, 2.578134522185058, 2.532936194061433, 2.8941551014416757,
        2.3419159956027915, 3.1529654021884084, 3.11252105034679,
      ],
    ],
  ])('%o with %i samples of extension', (filter, padding, wanted) => {
    const out = valueOf(filterZeroPhase(x, designFilter(filter, 1000), padding));
    expect(allFinite(out)).toBe(true);
    expect(
      farthest(
        at.map((k) => out[k]!),
        wanted,
      ),
    ).toBeLessThan(1e-9);
  });
});
