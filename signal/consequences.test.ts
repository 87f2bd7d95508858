import { describe, expect, it } from 'vitest';
import { consequencesOf } from '@/signal/consequences';
import { defaultSettings } from '@/signal/model';
import { testPipeline, testRig } from '@/signal/test-signals';

describe('consequences of a setup', () => {
  it('say what the rated speed means for the samples', () => {
    const rig = { ...testRig('single', 60, 2), ratedRpm: 3000 };
    const consequences = consequencesOf(rig, { ...defaultSettings, holdoffS: 0.0001 }, 20_000);
    expect(consequences.toothHz).toBe(3000);
    expect(consequences.samplesPerTooth).toBeCloseTo(20 / 3, 12);
    expect(consequences.highestRpm).toBe(10_000);
    expect(consequences.recommendedRpm).toBe(5_000);
    // Hold-off of 100 us, 60 teeth, duty 0.5: 5000 rpm (section 3.2 of the formulas).
    expect(consequences.holdoffRpm).toBeCloseTo(5000, 9);
    expect(consequences.holdoffHz).toBeCloseTo(5000, 9);
  });

  it('leave open what is not known yet', () => {
    expect(consequencesOf(testRig('single', 60), defaultSettings, null)).toEqual({
      toothHz: null,
      samplesPerTooth: null,
      highestRpm: null,
      recommendedRpm: null,
      lowestRpm: 0.5,
      holdoffHz: null,
      holdoffRpm: null,
    });
  });

  it('agree with what the signal path calls stopped', () => {
    const rig = testRig('single', 6);
    const pipeline = testPipeline(rig, 1000, { band: { mode: 'fixed', operateV: 1, releaseV: 0.5 } });
    const volts = Float64Array.from({ length: 5000 }, (_, i) => (i > 100 && i < 110 ? 2 : 0));
    pipeline.process([volts], volts.length);
    expect(pipeline.status().speedAtMostRpm).toBeCloseTo(
      consequencesOf(rig, defaultSettings, 1000).lowestRpm,
      9,
    );
  });
});
