import { describe, expect, it } from 'vitest';
import { normal, seeded } from '@/signal/test-signals';
import { LagCorrelation, toneReach, unlikeTone } from '@/signal/wheel-correlation';

describe('correlation with itself', () => {
  it('is 1 where a series repeats and 0 where it does not, apart from the ends', () => {
    const random = normal(seeded(2));
    const period = Array.from({ length: 20 }, () => random());
    const correlation = new LagCorrelation([20, 40, 13]);
    for (let i = 0; i < 4000; i++) correlation.add(period[i % 20]! + 0.1 * random(), 0.1);
    expect(correlation.at(0)).toBeCloseTo(1 / (1 + 0.01), 1);
    expect(correlation.at(1)).toBeCloseTo(correlation.at(0), 1);
    expect(Math.abs(correlation.at(2))).toBeLessThan(0.6);
    expect(correlation.pairs(1)).toBe(3960);
    const variance = period.reduce((sum, value) => sum + value * value, 0) / 20;
    expect(correlation.overError * 0.01).toBeCloseTo(variance + 0.01, 1);
  });

  it('says nothing of a series of nothing, and takes what is not finite for 0', () => {
    const correlation = new LagCorrelation([3]);
    for (let i = 0; i < 100; i++) correlation.add(i % 10 === 0 ? NaN : 0, 0);
    expect(correlation.at(0)).toBe(0);
    expect(correlation.overError).toBe(Infinity);
    correlation.clear();
    expect(correlation.pairs(0)).toBe(0);
  });
});

describe('a tone', () => {
  const beside = (at: (k: number) => number) => Array.from({ length: toneReach }, (_, k) => at(k + 1));

  it('is told from what differs at random', () => {
    for (const w of [0.3, 1, 2, 2.9]) expect(unlikeTone(beside((k) => Math.cos(k * w)))).toBeLessThan(0.01);
    // Of the sum of two steps less the two outside, over places that stand off at random.
    expect(unlikeTone([-0.4, -0.4, 0.4, -0.1])).toBeGreaterThan(0.3);
  });
});
