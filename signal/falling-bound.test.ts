import { describe, expect, it } from 'vitest';
import type { Sensing } from '@/signal/model';
import type { PipelineStatus } from '@/signal/pipeline-types';
import { normal, sampled, seeded, testPipeline, testRig, toothWheel } from '@/signal/test-signals';

const rateHz = 20_000;
const stoppedAfterS = 0.5;
const look = 40;

/** Looks at a rig whose place (positions passed) is given, 500 times a second. */
function looks(
  sensing: Sensing,
  positions: number,
  missing: number,
  placeAt: (t: number) => number,
  seconds: number,
  noiseV = 0.05,
): PipelineStatus[] {
  const noise = normal(seeded(41));
  const pipeline = testPipeline(testRig(sensing, positions, missing), rateHz, {
    speed: { method: 'turn', windowS: 0.1, stoppedAfterS },
  });
  const shifts = { single: [0], quadrature: [0, 0.25], 'three-hall': [0, 1 / 3, 2 / 3], 'width-coded': [0] };
  const n = seconds * rateHz;
  const arrays = shifts[sensing].map((shift) =>
    sampled(
      n,
      rateHz,
      (t) => toothWheel(positions, missing, () => (placeAt(t) - shift) / positions)(t) + noiseV * noise(),
    ),
  );
  const seen: PipelineStatus[] = [];
  for (let at = 0; at < n; at += look) {
    pipeline.process(
      arrays.map((array) => array.subarray(at, at + look)),
      look,
    );
    seen.push(pipeline.status());
    pipeline.drain();
  }
  return seen;
}

const cases: [Sensing, number, number][] = [
  ['single', 24, 0],
  ['single', 36, 1],
  ['quadrature', 16, 0],
  ['three-hall', 4, 0],
];

describe.each(cases)('silence on %s, %i - %i', (sensing, positions, missing) => {
  // At 400 positions a second for 1 s, then down to nothing in 0.2 s.
  const placeAt = (t: number): number => {
    const late = Math.min(Math.max(t - 1, 0), 0.2);
    return 0.3 + 400 * Math.min(t, 1) + 400 * late - 1000 * late * late;
  };
  const speedAt = (t: number): number => (60 / positions) * (t < 1 ? 400 : Math.max(0, 400 - 2000 * (t - 1)));
  const seen = looks(sensing, positions, missing, placeAt, 2);
  const slowing = seen.filter(({ nowS }) => nowS > 1);

  it('sets a bound that holds, falls, and never rises without an edge', () => {
    let before: PipelineStatus | null = null;
    for (const status of slowing) {
      const atMost = status.speedAtMostRpm ?? Infinity;
      expect(atMost).toBeGreaterThanOrEqual(speedAt(status.nowS));
      expect(Math.abs(status.speedRpm ?? 0)).toBeLessThanOrEqual(atMost);
      const edges = status.channels.reduce((sum, channel) => sum + channel.edges, 0);
      if (before && before.channels.reduce((sum, channel) => sum + channel.edges, 0) === edges)
        expect(atMost).toBeLessThanOrEqual((before.speedAtMostRpm ?? Infinity) * (1 + 1e-12));
      before = status;
    }
    const end = slowing.at(-1)!;
    expect(end).toMatchObject({ state: 'stopped', speedRpm: 0 });
    expect(end.speedAtMostRpm).toBeLessThan((60 * 1.1 * (missing + 1)) / (positions * stoppedAfterS));
  });

  it('leaves a doubt that holds standing still, once it has taken a third off the speed', () => {
    let bounded = 0;
    for (const { state, speedRpm, speedErrorRpm, speedAtMostRpm, nowS } of slowing) {
      if (state !== 'running' || Math.abs(speedRpm ?? NaN) !== speedAtMostRpm) continue;
      bounded++;
      expect(speedErrorRpm).toBeLessThanOrEqual(speedAtMostRpm / 2 + 1e-9);
      if (nowS < 1.3) continue;
      // From nothing up to the bound, and no wider.
      expect(speedErrorRpm! * 2).toBeCloseTo(speedAtMostRpm, 9);
    }
    expect(bounded).toBeGreaterThan(100);
  });
});

describe.each<Sensing>(['single', 'quadrature', 'three-hall'])(
  'a wheel of four with one off its place, %s',
  (sensing) => {
    it('does not cut into the speed of a steady shaft, though the wide state comes but once a turn', () => {
      const placeAt = (t: number): number => {
        const place = 0.3 + 12 * t;
        const past = ((place + 2) % 4) - 2;
        return place - 0.1 * Math.exp(-((past / 0.4) ** 2));
      };
      const seen = looks(sensing, 4, 0, placeAt, 4, 0.002).filter(({ nowS }) => nowS > 0.8);
      for (const { speedAtMostRpm } of seen) expect(speedAtMostRpm ?? Infinity).toBeGreaterThan(60 * 3);
    });
  },
);

describe('the doubt that the bound leaves', () => {
  it('grows from the error of the speed as the bound begins to bite', () => {
    const seen = looks('single', 24, 0, (t) => 0.3 + 100 * Math.min(t, 1.0025), 1.2).filter(
      ({ nowS }) => nowS > 1,
    );
    let last = 0;
    for (const { speedRpm, speedAtMostRpm, speedErrorRpm } of seen) {
      expect(speedErrorRpm).toBeGreaterThanOrEqual(Math.min(last, speedAtMostRpm! / 2) - 1e-9);
      if (speedRpm === speedAtMostRpm) {
        expect(speedErrorRpm).toBeLessThanOrEqual(Math.max(250 - speedAtMostRpm!, 0.5) * 1.05);
        last = speedErrorRpm!;
      }
    }
    expect(last).toBeGreaterThan(1);
  });
});
