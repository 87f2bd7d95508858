import { describe, expect, it } from 'vitest';
import type { SpeedMethod } from '@/signal/model';
import { honestyOf, judgeSpeeds, offsetsOf, passTeeth, ramp, TrainBench } from '@/signal/test-teeth';

const positions = 24;
const shaft = ramp(10, 0);
const wheel = { positions, pitchRms: 0.01, seed: 21 };
const methods: SpeedMethod[] = ['tooth', 'turn', 'window'];
const windowS = 0.06;

function teethOf(turns: number, motion = shaft) {
  return passTeeth(wheel, offsetsOf(wheel), motion, 0.003, turns);
}

describe.each(methods)('a speed per %s of a plain wheel', (method) => {
  const judged = (teeth: ReturnType<typeof teethOf>, motion = shaft) =>
    judgeSpeeds(new TrainBench(method, windowS, positions), teeth, motion, method, windowS, positions);

  it.each([1, 2, 3])(
    'is right across %i teeth in a row that did not show, once or in every turn',
    (missed) => {
      for (const isAlways of [false, true]) {
        const teeth = teethOf(12).filter(
          ({ place }) =>
            !(place % positions >= 7 && place % positions < 7 + missed && (isAlways || place < 200)),
        );
        const speeds = judged(teeth);
        for (const { off } of speeds) expect(Math.abs(off)).toBeLessThan(0.09);
        expect(honestyOf(speeds).within).toBeGreaterThan(0.95);
      }
    },
  );

  it('is right across a pulse that is no tooth, once or in every turn', () => {
    for (const share of [0.1, 0.35, 0.8]) {
      for (const isAlways of [false, true]) {
        const bench = new TrainBench(method, windowS, positions);
        const said: number[] = [];
        for (const { place, riseS, fallS, sigmaS } of teethOf(12)) {
          const pitchS = 1 / (10 * positions);
          const hasBurr = place % positions === 7 && (isAlways || (place > 100 && place < 120));
          // A short tooth, so that the burr stands apart from it.
          let made = bench.take({ riseS, fallS: hasBurr ? riseS + share * 0.5 * pitchS : fallS, sigmaS });
          if (hasBurr)
            made += bench.take({
              riseS: riseS + share * pitchS,
              fallS: riseS + (share + 0.1) * pitchS,
              sigmaS,
            });
          for (; made > 0; made--) said.push(bench.columns.rpm[bench.columns.count - made]!);
        }
        const wrong = said.filter((rpm) => Math.abs(rpm / 600 - 1) > 0.09);
        expect(wrong.length).toBe(0);
        expect(said.length).toBeGreaterThan(12 * positions - 3);
      }
    }
  });

  it('does not take a start, a stop or a hard ramp for either', () => {
    for (const motion of [ramp(0.1, 20), ramp(20, -9), ramp(2, 60)]) {
      const teeth = teethOf(1.2, motion);
      const speeds = judged(teeth, motion);
      expect(speeds.length).toBe(teeth.length - 1);
      expect(honestyOf(speeds).within).toBeGreaterThan(0.95);
    }
  });
});

describe('a wheel of few teeth', () => {
  it('says so where a tooth did not show, which a change of speed could look like', () => {
    const few = { positions: 3, seed: 22 };
    const teeth = passTeeth(few, offsetsOf(few), shaft, 0.002, 40).filter(({ place }) => place !== 80);
    const bench = new TrainBench('tooth', 1, 3);
    const speeds = judgeSpeeds(bench, teeth, shaft, 'tooth', 1, 3);
    const across = speeds.find(({ place }) => place === 81)!;
    expect(across.off).toBeCloseTo(-0.5, 1);
    expect(Math.abs(across.off)).toBeLessThan(2 * across.said);
  });

  it('drops a bounce, which no shaft can look like', () => {
    const bench = new TrainBench('tooth', 1, 3);
    const few = { positions: 3, seed: 23 };
    for (const tooth of passTeeth(few, offsetsOf(few), shaft, 0.0005, 30)) {
      const { place, riseS } = tooth;
      bench.take(place === 50 ? { ...tooth, fallS: riseS + 0.0002 } : tooth);
      if (place === 50) bench.take({ ...tooth, riseS: riseS + 0.0005 });
    }
    const { rpm, count } = bench.columns;
    for (let i = 0; i < count; i++) expect(Math.abs(rpm[i]! / 600 - 1)).toBeLessThan(0.01);
  });
});
