/** What a speed says of its own error, against the truth: all methods, even and uneven wheels, steady and ramping, first turns too. */
import { describe, expect, it } from 'vitest';
import type { Filter, SpeedMethod } from '@/signal/model';
import type { JudgedSpeed, Shaft, WheelSpec } from '@/signal/test-teeth';
import { honestyOf, judgeSpeeds, offsetsOf, passTeeth, ramp, swaying, TrainBench } from '@/signal/test-teeth';
import { normal, sampled, seeded, testPipeline, testRig } from '@/signal/test-signals';

const methods: SpeedMethod[] = ['tooth', 'turn', 'window'];
const wheels: [number, number][] = [
  [4, 0],
  [8, 0],
  [13, 0],
  [36, 0],
  [36, 1],
  [60, 2],
];
const shafts: [string, Shaft][] = [
  ['steady', ramp(10, 0)],
  ['ramping', swaying(10, 0.3, 0.2)],
];
const windowTeeth = 8;

function run(
  method: SpeedMethod,
  wheel: WheelSpec,
  shaft: Shaft,
  noise: number,
  turns: number,
): { speeds: JudgedSpeed[]; bench: TrainBench } {
  const { positions, missing } = wheel;
  const windowS = windowTeeth / (10 * positions);
  const bench = new TrainBench(method, windowS, positions, missing);
  const teeth = passTeeth(wheel, offsetsOf(wheel), shaft, noise, turns);
  return { speeds: judgeSpeeds(bench, teeth, shaft, method, windowS, positions), bench };
}

describe.each(methods)('a speed per %s', (method) => {
  describe.each(shafts)('of a %s shaft', (_name, shaft) => {
    it.each([
      ['even teeth, much noise', 0, 0.011],
      ['teeth off by 1 %', 0.01, 0.004],
      ['teeth off by 3 %', 0.03, 0.002],
    ])('keeps to its error, which is not wide: %s', (_what, pitchRms, noise) => {
      for (const [positions, missing] of wheels) {
        const later: JudgedSpeed[] = [];
        const first: JudgedSpeed[] = [];
        for (let seed = 0; seed < Math.max(8, 240 / positions); seed++) {
          const wheel = { positions, missing, pitchRms, seed: 100 * positions + seed };
          const { speeds } = run(method, wheel, shaft, noise, Math.max(10, Math.ceil(100 / positions)));
          // What a wheel may do slowly over its turn is presumed until some turns were seen.
          first.push(...speeds.filter(({ place }) => place <= positions));
          later.push(...speeds.filter(({ place }) => place > 6 * positions));
        }
        const { within, rms, said } = honestyOf(later);
        expect(within, `${positions}-${missing}`).toBeGreaterThan(0.95);
        expect(said / rms, `${positions}-${missing}`).toBeLessThan(2);
        expect(honestyOf(first).within, `${positions}-${missing}, first turn`).toBeGreaterThan(0.95);
      }
    });
  });

  it('keeps to its error from the first tooth of a shaft that starts from rest', () => {
    for (const [positions, missing] of wheels.slice(1)) {
      const speeds: JudgedSpeed[] = [];
      for (let seed = 0; seed < 40; seed++) {
        const wheel = { positions, missing, pitchRms: 0.01, seed: 7000 + 50 * positions + seed };
        speeds.push(...run(method, wheel, ramp(0.2, 20), 0.006, 1.5).speeds);
      }
      expect(honestyOf(speeds).within, `${positions}-${missing}`).toBeGreaterThan(0.95);
    }
  });

  it('keeps to its error on a wheel that runs out, once a few turns have shown it', () => {
    for (const positions of [8, 36]) {
      const wheel = { positions, pitchRms: 0.003, runOut: 0.05, seed: positions };
      const { speeds } = run(method, wheel, ramp(10, 0), 0.004, 40);
      const known = honestyOf(speeds.filter(({ place }) => place > 6 * positions));
      expect(known.within).toBeGreaterThan(0.95);
    }
  });
});

describe('instants on a grid', () => {
  it.each([
    [8, 10.03],
    [36, 10.03],
    [36, 20.3],
  ])('%i teeth, %f samples each: a turn knows that it may be off by a sample', (positions, samples) => {
    const shaft = ramp(10, 0);
    const sampleS = 1 / (10 * positions * samples);
    const bench = new TrainBench('turn', 1, positions);
    const teeth = passTeeth({ positions, seed: 1 }, offsetsOf({ positions, seed: 1 }), shaft, 0, 60).map(
      ({ riseS, fallS, ...tooth }) => ({
        ...tooth,
        riseS: Math.ceil(riseS / sampleS) * sampleS,
        fallS: Math.ceil(fallS / sampleS) * sampleS,
        sigmaS: sampleS / Math.sqrt(12),
      }),
    );
    const speeds = judgeSpeeds(bench, teeth, shaft, 'turn', 1, positions);
    expect(honestyOf(speeds.filter(({ place }) => place > positions)).within).toBeGreaterThan(0.95);
  });
});

describe('through the whole path', () => {
  const rateHz = 20_000;
  const hz = 400;
  const positions = 24;

  it.each<[string, Filter]>([
    ['no filter', { kind: 'none' }],
    ['a low pass near the teeth', { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 600 }],
    ['a gentle low pass', { kind: 'lowpass', family: 'bessel', order: 2, cutoffHz: 600 }],
    ['a high pass', { kind: 'highpass', family: 'butterworth', order: 2, cutoffHz: 40 }],
    ['a band pass', { kind: 'bandpass', family: 'butterworth', order: 4, lowHz: 200, highHz: 700 }],
  ])('with %s', (_name, filter) => {
    for (const method of methods) {
      const noise = normal(seeded(31));
      const windowS = windowTeeth / hz;
      const pipeline = testPipeline(testRig('single', positions), rateHz, {
        filter,
        speed: { method, windowS, stoppedAfterS: 2 },
      });
      const volts = sampled(
        4 * rateHz,
        rateHz,
        (t) => 1.65 + Math.sin(2 * Math.PI * hz * t) + 0.07 * noise(),
      );
      pipeline.process([volts], volts.length);
      const { count, rpm, errorRpm } = pipeline.output.speed;
      const truth = (60 * hz) / positions;
      const speeds = Array.from({ length: count - 1 }, (_, i) => ({
        off: rpm[i + 1]! / truth - 1,
        said: errorRpm[i + 1]! / truth,
        place: i + 1,
      }));
      const { within, rms, said } = honestyOf(speeds.filter(({ place }) => place > positions));
      expect(within, method).toBeGreaterThan(0.95);
      expect(said / rms, method).toBeLessThan(2);
    }
  });
});
