import { describe, expect, it } from 'vitest';
import type { WheelSpec } from '@/signal/test-teeth';
import { offsetsOf, passTeeth, ramp, swaying, TrainBench } from '@/signal/test-teeth';
import { sampled, testPipeline, testRig } from '@/signal/test-signals';
import { Motion } from '@/signal/motion';

function benchOf(wheel: WheelSpec, shaft = ramp(10, 0), noise = 0.005, turns = 4): TrainBench {
  const bench = new TrainBench('tooth', 1, wheel.positions, wheel.missing);
  for (const tooth of passTeeth(wheel, offsetsOf(wheel), shaft, noise, turns)) bench.take(tooth);
  return bench;
}

describe('acceleration', () => {
  it.each<[number, number]>([
    [1, 0],
    [2, 0],
    [8, 0],
    [36, 0],
    [36, 1],
    [60, 2],
    [600, 0],
  ])('is within two of its errors, of teeth off by 3 %% too: %i - %i', (positions, missing) => {
    for (const gain of [0, 4, -3]) {
      let within = 0;
      let squares = 0;
      const said: number[] = [];
      const runs = 60;
      for (let seed = 0; seed < runs; seed++) {
        const wheel = { positions, missing, pitchRms: 0.03, seed: 31 + 2 * seed };
        const { train } = benchOf(wheel, ramp(10, gain), 0.005, positions < 4 ? 9 : 3);
        const off = train.accelerationRpmPerS - 60 * gain;
        if (Math.abs(off) <= 2 * train.accelerationErrorRpmPerS) within++;
        squares += (off * off) / runs;
        said.push(train.accelerationErrorRpmPerS);
      }
      expect(within / runs).toBeGreaterThanOrEqual(0.95);
      said.sort((a, b) => a - b);
      expect(said[runs >> 1]! / Math.sqrt(squares)).toBeLessThan(2.2);
    }
  });

  it('of 36 teeth from 20 rad/s at 50 rad/s^2 is 50 rad/s^2 without noise (formula)', () => {
    const perTurn = 2 * Math.PI;
    const { train } = benchOf({ positions: 36, seed: 1 }, ramp(20 / perTurn, 50 / perTurn), 0, 3);
    expect((train.accelerationRpmPerS * perTurn) / 60).toBeCloseTo(50, 6);
  });

  it('is not bent by a gap that is judged as it comes, nor by a tooth that did not show', () => {
    const wheel = { positions: 36, missing: 2, pitchRms: 0.02, seed: 32 };
    const bench = new TrainBench('window', 0.05, 36, 2);
    for (const tooth of passTeeth(wheel, offsetsOf(wheel), ramp(10, 5), 0.002, 5))
      if (tooth.place % 36 !== 11) bench.take(tooth);
    const { train } = bench;
    expect(Math.abs(train.accelerationRpmPerS - 300)).toBeLessThan(3 * train.accelerationErrorRpmPerS);
    expect(train.accelerationErrorRpmPerS).toBeLessThan(10);
  });

  it('is not known before one and a half turns, nor from before a stop', () => {
    const wheel = { positions: 24, seed: 33 };
    const known = (bench: TrainBench): boolean => !Number.isNaN(bench.train.accelerationRpmPerS);
    expect(known(benchOf(wheel, ramp(10, 0), 0.002, 1.4))).toBe(false);
    expect(known(benchOf(wheel, ramp(10, 0), 0.002, 1.6))).toBe(true);
    const bench = benchOf(wheel);
    bench.train.forget('stopped');
    expect(known(bench)).toBe(false);
    expect(bench.train.accelerationErrorRpmPerS).toBeNaN();
    // Stood still for a while, and faster than before: that is no acceleration.
    const teeth = passTeeth(wheel, offsetsOf(wheel), ramp(20, 0), 0.002, 3);
    for (const [i, tooth] of teeth.entries()) {
      bench.take({ ...tooth, riseS: tooth.riseS + 9, fallS: tooth.fallS + 9 });
      expect(known(bench)).toBe(i >= 36);
      if (known(bench))
        expect(Math.abs(bench.train.accelerationRpmPerS)).toBeLessThan(
          6 * bench.train.accelerationErrorRpmPerS,
        );
    }
  });

  it('that changes by fits has an error that says so', () => {
    const { train } = benchOf({ positions: 24, seed: 34 }, swaying(10, 0.2, 7), 0.002, 4);
    expect(train.accelerationErrorRpmPerS).toBeGreaterThan(15);
  });

  it('is that of the shaft, signed as its speed', () => {
    const rig = testRig('quadrature', 32);
    rig.wheel.gearRatio = 4;
    const rateHz = 20_000;
    for (const sign of [1, -1]) {
      const pipeline = testPipeline(rig, rateHz);
      const place = (t: number): number => sign * (300 * t + 100 * t * t);
      const pair = [0, 0.25].map((shift) =>
        sampled(rateHz, rateHz, (t) => 1.65 + Math.sin(2 * Math.PI * (place(t) - shift))),
      );
      pipeline.process(pair, rateHz);
      const { motion } = pipeline as unknown as { motion: Motion };
      // 200 positions per second squared, 128 positions a turn of the shaft.
      expect(motion.train.accelerationRpmPerS * sign).toBeCloseTo((200 * 60) / 128, 0);
    }
  });
});
