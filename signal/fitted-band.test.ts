/** What real wheels do to a fitted band: teeth that differ, drift, ripple before the first teeth, large baselines. */
import { describe, expect, it } from 'vitest';
import { normal, sampled, seeded, testPipeline, testRig } from '@/signal/test-signals';
import type { Pipeline } from '@/signal/pipeline-types';

const rateHz = 10_000;

type Counted = { rises: number[]; pipeline: Pipeline };

/** Rising edges of the first channel, s. */
function counted(volts: Float64Array, pulses: number, missing = 0): Counted {
  const pipeline = testPipeline(testRig('single', pulses, missing), rateHz);
  const rises: number[] = [];
  for (let from = 0; from < volts.length; from += 1000) {
    const part = volts.subarray(from, from + 1000);
    pipeline.process([part], part.length);
    const { count, midT, flags } = pipeline.output.edges[0]!;
    for (let i = 0; i < count; i++) if ((flags[i]! & 1) !== 0) rises.push(midT[i]!);
    pipeline.drain();
  }
  return { rises, pipeline };
}

/** How many of `rises` lie from `fromS` on. */
const after = (rises: readonly number[], fromS: number): number => rises.filter((t) => t >= fromS).length;

/** Bell-shaped pulses on a constant base, tooth k as high as `heightOf(k)`; 100 teeth a second. */
function pulses(heightOf: (k: number) => number, noiseV: number, baseV = 0.5): (t: number) => number {
  const noise = normal(seeded(17));
  return (t) => {
    const place = 100 * t;
    const k = Math.floor(place);
    const x = (place - k - 0.5) / 0.14;
    return baseV + heightOf(k) * Math.exp(-x * x) + noiseV * noise();
  };
}

describe('a fitted band', () => {
  const kinds: [string, (k: number) => number][] = [
    ['smoothly over the turn', (k) => 1.25 + 0.75 * Math.cos((2 * Math.PI * k) / 20)],
    ['every second one', (k) => (k % 2 === 0 ? 2 : 0.5)],
    ['as if at random', (k) => 0.5 + 1.5 * ((((k % 20) * 7919) % 20) / 19)],
    ['one of twenty', (k) => (k % 20 === 7 ? 0.5 : 2)],
  ];
  it.each(kinds)('counts pulses whose peaks differ four to one: %s', (_name, heightOf) => {
    const { rises } = counted(sampled(20 * rateHz, rateHz, pulses(heightOf, 0.01)), 20);
    // The band may take three turns to know them all.
    expect(after(rises, 1)).toBe(1900);
  });

  it('counts a sine whose swing differs four to one within a turn', () => {
    const noise = normal(seeded(3));
    const wave = (t: number) =>
      1.65 + (0.6 + 0.36 * Math.cos(2 * Math.PI * 5 * t)) * Math.sin(2 * Math.PI * 100 * t) + 0.006 * noise();
    const { rises } = counted(sampled(20 * rateHz, rateHz, wave), 20);
    expect(Math.abs(after(rises, 1) - 1900)).toBeLessThanOrEqual(1);
  });

  it('counts a weak tooth right after the gap of a wheel, and not the small lobe inside the gap', () => {
    const heightOf = (k: number) => {
      const position = k % 20;
      if (position === 19) return 0.08;
      return position === 0 ? 0.6 : 2;
    };
    const { rises, pipeline } = counted(sampled(20 * rateHz, rateHz, pulses(heightOf, 0.008)), 20, 1);
    expect(after(rises, 1)).toBe(1805);
    expect(pipeline.status().synced).toBe(true);
  });

  it('follows a swing that grows with speed until it clips, and a middle that drifts by several swings', () => {
    const noise = normal(seeded(5));
    // From 10 to 250 teeth a second in 20 s; the swing with it, cut off at the rails.
    const growing = (t: number) => {
      const hz = 10 + 12 * t;
      const volts = 1.65 + 0.01 * hz * Math.sin(2 * Math.PI * (10 * t + 6 * t * t)) + 0.004 * noise();
      return Math.min(3.2, Math.max(0.1, volts));
    };
    const { rises } = counted(sampled(20 * rateHz, rateHz, growing), 12);
    expect(Math.abs(after(rises, 2) - (10 * 18 + 6 * (400 - 4)))).toBeLessThanOrEqual(1);

    const drifting = (t: number) =>
      1 + 0.8 * Math.sin((2 * Math.PI * t) / 60) + 0.1 * Math.sin(2 * Math.PI * 80 * t) + 0.002 * noise();
    const slow = counted(sampled(60 * rateHz, rateHz, drifting), 12).rises;
    expect(Math.abs(after(slow, 1) - 80 * 59)).toBeLessThanOrEqual(1);
  });

  it('works on ten millivolts on a baseline of 4.2 V', () => {
    const noise = normal(seeded(7));
    const wave = (t: number) => 4.2 + 0.01 * Math.sin(2 * Math.PI * 60 * t) + 0.0003 * noise();
    const { rises } = counted(sampled(10 * rateHz, rateHz, wave), 12);
    expect(Math.abs(after(rises, 1) - 540)).toBeLessThanOrEqual(1);
  });

  it.each([0.05, 0.1, 0.2])('lets go of a ripple of %d of the teeth once they come', (share) => {
    const noise = normal(seeded(9));
    const wave = (t: number) => {
      const teeth = t < 3 ? -1 : Math.sin(2 * Math.PI * (100 * (t - 3) - 0.25));
      return 1.65 + teeth + share * Math.sin(2 * Math.PI * 50 * t + 1) + 0.004 * noise();
    };
    const { rises } = counted(sampled(13 * rateHz, rateHz, wave), 20);
    expect(Math.abs(after(rises, 4) - 900)).toBeLessThanOrEqual(1);
  });

  it('is not thrown by one wild spike, nor by a step of the baseline', () => {
    const noise = normal(seeded(11));
    const wave = (t: number) => {
      const spike = Math.abs(t - 4) < 0.0002 ? 6 : 0;
      const step = t > 7 ? 0.9 : 0;
      return 1.65 + step + 0.5 * Math.sin(2 * Math.PI * 100 * t) + spike + 0.005 * noise();
    };
    const { rises } = counted(sampled(12 * rateHz, rateHz, wave), 20);
    expect(Math.abs(after(rises, 1) - after(rises, 7) - 600)).toBeLessThanOrEqual(2);
    expect(Math.abs(after(rises, 8) - 400)).toBeLessThanOrEqual(1);
  });

  it('says nothing of a line at rest: constant, noisy, or with one code toggling', () => {
    const noise = normal(seeded(13));
    for (const wave of [
      () => 1.65,
      () => 1.65 + 0.01 * noise(),
      (t: number) => 1.65 + ((0.0008 * Math.round(t * 37)) % 2),
    ])
      expect(counted(sampled(5 * rateHz, rateHz, wave), 20).rises).toEqual([]);
  });
});

describe('fitted bands of a shaft that shakes between two turns', () => {
  const shakes = [
    { at: 0.1, by: 0.06, name: 'beside an edge' },
    { at: 0.12, by: 0.12, name: 'across both' },
    { at: 0.38, by: 0.07, name: 'with a top and a bottom before the sensors' },
    { at: 0.63, by: 0.04, name: 'by little' },
    { at: 0.15, by: 0.15, name: 'beyond the middle on one side' },
    { at: 0.4, by: 0.06, name: 'on two flanks, in short blocks', block: 20 },
    { at: 0.6, by: 0.06, name: 'on two flanks, further on, in short blocks', block: 20 },
  ];
  it.each(shakes)('count every cycle afterwards: $name', ({ at, by, block = 1000 }) => {
    const noise = normal(seeded(21));
    // 60 cycles in 1 s, two or three hundred swings about one place, 60 cycles more.
    const place = (t: number): number => {
      if (t < 1) return 0;
      if (t < 2) return (60 + at) * (t - 1);
      if (t < 12)
        return (
          60 +
          at +
          by * Math.sin(2 * Math.PI * 23 * (t - 2)) * Math.min(1, 5 * (t - 2.2) ** 2 * (t > 2.2 ? 1 : 0))
        );
      return 60 + at + 60 * Math.min(1, t - 12);
    };
    const line = (phase: number) =>
      sampled(14 * rateHz, rateHz, (t) => 1.65 + Math.sin(2 * Math.PI * (place(t) - phase)) + 0.03 * noise());
    const pipeline = testPipeline(testRig('quadrature', 12), rateHz);
    const lines = [line(0), line(0.25)];
    let before = NaN;
    for (let from = 0; from < 14 * rateHz; from += block) {
      const parts = lines.map((volts) => volts.subarray(from, from + block));
      pipeline.process(parts, block);
      pipeline.drain();
      if (from === 2.1 * rateHz) before = pipeline.status().pulses;
    }
    expect(pipeline.status().pulses - before).toBeCloseTo(60, 9);
  });
});
