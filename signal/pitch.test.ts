import { describe, expect, it } from 'vitest';
import { createPitchLearner, learnTurn } from '@/signal/statistics/pitch-learning';
import { valueOf } from '@/signal/statistics/test-values';
import type { JudgedSpeed, Shaft, Tooth, WheelSpec } from '@/signal/test-teeth';
import { honestyOf, judgeSpeeds, offsetsOf, passTeeth, ramp, swaying, TrainBench } from '@/signal/test-teeth';
import { sampled, testPipeline, testRig, normal, seeded } from '@/signal/test-signals';
import { PitchLearner } from '@/signal/pitch-learner';

const steady = ramp(10, 0);

function feed(bench: TrainBench, teeth: readonly Tooth[]): void {
  for (const tooth of teeth) bench.take(tooth);
}

/** So much later, and noise anew. */
function later(teeth: readonly Tooth[], byS: number): Tooth[] {
  return teeth.map((tooth) => ({ ...tooth, riseS: tooth.riseS + byS, fallS: tooth.fallS + byS }));
}

function speedsOf(
  wheel: WheelSpec,
  shaft: Shaft,
  noise: number,
  turns: number,
): { bench: TrainBench; speeds: JudgedSpeed[] } {
  const bench = new TrainBench('tooth', 1, wheel.positions, wheel.missing);
  const teeth = passTeeth(wheel, offsetsOf(wheel), shaft, noise, turns);
  return { bench, speeds: judgeSpeeds(bench, teeth, shaft, 'tooth', 1, wheel.positions) };
}

describe('pitches of a wheel', () => {
  it.each([
    ['plain, 4 teeth', 4, 0],
    ['plain, 36 teeth', 36, 0],
    ['36 - 1', 36, 1],
    ['60 - 2', 60, 2],
  ])(
    'are learnt in some twenty turns and taken out of the speed from tooth to tooth: %s',
    (_name, positions, missing) => {
      const noise = 0.004;
      const { bench, speeds } = speedsOf({ positions, missing, pitchRms: 0.02, seed: 3 }, steady, noise, 60);
      const status = bench.train.pitch;
      expect(status.state).toBe('in-use');
      expect(status.uneven! / 0.02).toBeGreaterThan(0.4);
      expect(status.uneven! / 0.02).toBeLessThan(1.8);
      expect(status.uncertain).toBeLessThan(0.0025);
      const before = honestyOf(speeds.filter(({ place }) => place > 4 * positions && place < 18 * positions));
      const after = honestyOf(speeds.filter(({ place }) => place > 35 * positions));
      // What is left is the noise of two edges.
      expect(before.rms).toBeGreaterThan(0.015);
      expect(after.rms / (Math.SQRT2 * noise)).toBeLessThan(1.15);
      expect(after.within).toBeGreaterThan(0.95);
      expect(after.said / after.rms).toBeLessThan(1.6);
    },
  );

  it('four teeth 90.9/89.1/90.3/89.7 degrees apart read 1200 rpm each once learnt (formula)', () => {
    const shaft = ramp(20, 0);
    const wheel = { positions: 4, seed: 1 };
    const offsets = [0, 0.9 / 90, 0, 0.3 / 90];
    const bench = new TrainBench('tooth', 1, 4);
    const teeth = passTeeth(wheel, offsets, shaft, 0, 40);
    feed(bench, teeth);
    const { rpm, count } = bench.columns;
    const raw = [4, 1, 2, 3].map((k) => rpm[7 + k]!);
    [1204.01, 1188.12, 1212.12, 1196.01].forEach((wanted, k) =>
      expect(Math.abs(raw[k]! - wanted)).toBeLessThan(0.01),
    );
    for (let i = count - 4; i < count; i++) expect(Math.abs(rpm[i]! - 1200)).toBeLessThan(0.01);
  });

  it('agree with the pure learner on a steady shaft', () => {
    const positions = 12;
    const wheel = { positions, pitchRms: 0.02, seed: 4 };
    const teeth = passTeeth(wheel, offsetsOf(wheel), steady, 0.001, 60);
    const bench = new TrainBench('tooth', 1, positions);
    feed(bench, teeth);
    const pure = valueOf(createPitchLearner(new Float64Array(positions).fill(1 / positions)));
    for (let turn = 0; turn < 59; turn++)
      valueOf(
        learnTurn(
          pure,
          teeth.slice(turn * positions, (turn + 1) * positions + 1).map(({ riseS }) => riseS),
        ),
      );
    // Offsets from shares: summed up, and about their mean.
    let sum = 0;
    const offsets = Array.from(pure.mean, (share) => {
      const at = sum;
      sum += share * positions - 1;
      return at;
    });
    const mean = offsets.reduce((total, off) => total + off, 0) / positions;
    const rms = Math.sqrt(offsets.reduce((total, off) => total + (off - mean) ** 2, 0) / (positions - 1));
    expect(bench.train.pitch.uneven! / rms).toBeCloseTo(1, 1);
  });

  it('are learnt on a shaft that speeds up and slows down evenly', () => {
    const { bench, speeds } = speedsOf(
      { positions: 36, pitchRms: 0.02, seed: 5 },
      swaying(10, 0.2, 0.1),
      0.002,
      80,
    );
    expect(bench.train.pitch.state).toBe('in-use');
    const after = honestyOf(speeds.filter(({ place }) => place > 60 * 36));
    expect(after.rms).toBeLessThan(0.0035);
    expect(after.within).toBeGreaterThan(0.95);
  });

  it('are not learnt from turns whose speed changes by fits', () => {
    const { bench } = speedsOf({ positions: 24, pitchRms: 0.02, seed: 6 }, swaying(10, 0.4, 2.7), 0.002, 60);
    expect(bench.train.pitch).toMatchObject({ state: 'learning' });
    expect(bench.train.pitch.turns).toBeLessThan(20);
  });

  it('are not used before they are known to a quarter of a per cent', () => {
    const { bench } = speedsOf({ positions: 24, pitchRms: 0.01, seed: 7 }, steady, 0.04, 40);
    expect(bench.train.pitch.turns).toBeGreaterThan(30);
    expect(bench.train.pitch.state).toBe('learning');
  });

  it('that are off by a fifth are damage, and stay in the speed', () => {
    const wheel = { positions: 24, pitchRms: 0.003, seed: 8 };
    const offsets = offsetsOf(wheel);
    offsets[5] = 0.23;
    const bench = new TrainBench('tooth', 1, 24);
    feed(bench, passTeeth(wheel, offsets, steady, 0.001, 50));
    expect(bench.train.pitch.state).toBe('learning');
  });

  it('of a wheel with a gap are in use again as soon as it is in sync after a stop', () => {
    const wheel = { positions: 36, missing: 1, pitchRms: 0.02, seed: 9 };
    const teeth = passTeeth(wheel, offsetsOf(wheel), steady, 0.002, 40);
    const bench = new TrainBench('tooth', 1, 36, 1);
    feed(bench, teeth);
    bench.train.forget('stopped');
    // It stood between tooth 10 and 11.
    feed(bench, later(teeth.slice(11, 11 + 4 * 35), 60));
    const { rpm, count } = bench.columns;
    expect(bench.train.pitch.state).toBe('in-use');
    for (let i = count - 35; i < count; i++) expect(Math.abs(rpm[i]! / 600 - 1)).toBeLessThan(0.012);
  });

  it('of a plain wheel are found by their pattern after a stop, wherever it stands', () => {
    const wheel = { positions: 24, pitchRms: 0.02, seed: 10 };
    const teeth = passTeeth(wheel, offsetsOf(wheel), steady, 0.002, 40);
    for (const begin of [1, 7, 23]) {
      const bench = new TrainBench('tooth', 1, 24);
      feed(bench, teeth);
      bench.train.forget('stopped');
      feed(bench, later(teeth.slice(begin, begin + 24), 60));
      expect(bench.train.pitch.state).toBe('learning');
      feed(bench, later(teeth.slice(begin + 24, begin + 24 * 9), 60));
      expect(bench.train.pitch.state).toBe('in-use');
      const { rpm, count } = bench.columns;
      for (let i = count - 24; i < count; i++) expect(Math.abs(rpm[i]! / 600 - 1)).toBeLessThan(0.012);
    }
  });

  it('of another wheel are withdrawn, and learnt anew', () => {
    for (const missing of [0, 1]) {
      const one = { positions: 24, missing, pitchRms: 0.02, seed: 11 };
      const other = { positions: 24, missing, pitchRms: 0.02, seed: 12 };
      const bench = new TrainBench('tooth', 1, 24, missing);
      feed(bench, passTeeth(one, offsetsOf(one), steady, 0.002, 40));
      expect(bench.train.pitch.state).toBe('in-use');
      bench.train.forget('stopped');
      const teeth = later(passTeeth(other, offsetsOf(other), steady, 0.002, 60), 60);
      feed(bench, teeth.slice(0, 18 * (24 - missing)));
      expect(bench.train.pitch.state).toBe('learning');
      feed(bench, teeth.slice(18 * (24 - missing)));
      expect(bench.train.pitch.state).toBe('in-use');
      const { rpm, count } = bench.columns;
      for (let i = count - 24; i < count; i++) expect(Math.abs(rpm[i]! / 600 - 1)).toBeLessThan(0.012);
    }
  });

  it('that change while they are in use widen the error at once, and are learnt anew', () => {
    const wheel = { positions: 24, pitchRms: 0.01, seed: 13 };
    const offsets = offsetsOf(wheel);
    const bent = offsets.with(5, offsets[5]! + 0.06).with(17, offsets[17]! - 0.05);
    const bench = new TrainBench('tooth', 1, 24);
    const teeth = [
      ...passTeeth(wheel, offsets, steady, 0.002, 40),
      ...passTeeth({ ...wheel, seed: 99 }, bent, steady, 0.002, 60, 40),
    ];
    const speeds = judgeSpeeds(bench, teeth, steady, 'tooth', 1, 24);
    expect(bench.train.pitch.state).toBe('in-use');
    const during = (from: number, to: number) =>
      honestyOf(speeds.filter(({ place }) => place >= from * 24 && place < to * 24));
    expect(during(41, 44).said / during(36, 40).said).toBeGreaterThan(2);
    expect(during(50, 60).within).toBeGreaterThan(0.9);
    const after = honestyOf(speeds.filter(({ place }) => place > 90 * 24));
    expect(after.rms).toBeLessThan(0.0045);
  });

  it('of a wheel of one tooth are none', () => {
    const { bench } = speedsOf({ positions: 1, seed: 14 }, steady, 0.002, 60);
    expect(bench.train.pitch).toMatchObject({ state: 'none', turns: 0 });
  });

  it('are learnt for each direction of a quadrature pair', () => {
    const rateHz = 20_000;
    const positions = 16;
    const off = (place: number): number => 0.03 * Math.sin((4 * Math.PI * place) / positions);
    const pair = (cycles: (t: number) => number, n: number): Float64Array[] =>
      [0, 0.25].map((shift) =>
        sampled(n, rateHz, (t) => {
          const place = cycles(t);
          return 1.65 + Math.sin(2 * Math.PI * (place - off(place) - shift));
        }),
      );
    // Out for 3 s, back for 3 s.
    const cycles = (t: number): number => (t < 3 ? 200 * t : 1200 - 200 * t);
    const pipeline = testPipeline(testRig('quadrature', positions), rateHz, {
      speed: { method: 'tooth', windowS: 0.1, stoppedAfterS: 2 },
    });
    const arrays = pair(cycles, 6 * rateHz);
    pipeline.process(arrays, 6 * rateHz);
    const { t, rpm, count } = pipeline.output.speed;
    const spread = (fromS: number, toS: number): number => {
      let most = 0;
      for (let i = 0; i < count; i++)
        if (t[i]! > fromS && t[i]! < toS) most = Math.max(most, Math.abs(Math.abs(rpm[i]!) / 750 - 1));
      return most;
    };
    expect(spread(0.5, 1.5)).toBeGreaterThan(0.015);
    expect(spread(2.6, 2.95)).toBeLessThan(0.003);
    expect(spread(3.3, 4)).toBeGreaterThan(0.015);
    expect(spread(5.6, 5.99)).toBeLessThan(0.003);
  });
});

describe('PitchLearner', () => {
  it('does not count a common shift of a turn, nor a tooth that did not come', () => {
    const learner = new PitchLearner(6);
    const random = normal(seeded(15));
    const offsets = [0.01, -0.02, 0.015, 0, -0.01, 0.005];
    for (let turn = 0; turn < 200; turn++) {
      const shift = random();
      learner.learn(
        Float64Array.from(offsets, (off, k) =>
          k === 4 && turn % 2 === 0 ? NaN : off + shift + 0.001 * random(),
        ),
        0,
      );
    }
    expect(learner.isAccepted()).toBe(true);
    offsets.forEach((off, k) =>
      expect(learner.offsets[k]! - learner.offsets[0]!).toBeCloseTo(off - 0.01, 2.7),
    );
    expect(Math.sqrt(learner.scatter)).toBeCloseTo(0.001, 3.5);
    expect(
      learner.misfit(
        Float64Array.from(offsets, (off) => off + 7),
        0,
      ),
    ).toBeLessThan(1e-7);
    expect(learner.misfit(Float64Array.from(offsets.toReversed()), 0)).toBeGreaterThan(1e-4);
  });
});
