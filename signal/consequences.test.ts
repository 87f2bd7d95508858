import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { consequencesOf, highestRpmAt } from '@/signal/consequences';
import { defaultSettings } from '@/signal/model';
import type { RigSetup, Sensing, WidthClass } from '@/signal/model';
import { pulsesPerLikePole, pulsesPerPolePair } from '@/signal/sensor-notes';
import { speedLimits } from '@/signal/speed-limits';
import { openPaths } from '@/signal/test-paths';
import { sampled, testChannel, testPipeline, testRig } from '@/signal/test-signals';
import { turnIssue } from '@/signal/validate-rig';
import { rateIssue } from '@/signal/validate-timing';

const ladder: WidthClass[] = [
  { widthS: 45e-6, means: 'weak' },
  { widthS: 90e-6, means: 'forward' },
  { widthS: 180e-6, means: 'reverse' },
];
const coded = (pulsesPerTurn: number): RigSetup => {
  const rig = testRig('width-coded', pulsesPerTurn);
  return { ...rig, wheel: { ...rig.wheel, widthClasses: ladder } };
};

describe('consequences of a setup', () => {
  it('say what the rated speed means for the samples', () => {
    const rig = { ...testRig('single', 60, 2), ratedRpm: 3000 };
    const consequences = consequencesOf(rig, { ...defaultSettings, holdoffS: 0.0001 }, 20_000);
    expect(consequences.toothHz).toBe(3000);
    expect(consequences.samplesPerTooth).toBeCloseTo(20 / 3, 12);
    expect(consequences.highestRpm).toBe(10_000);
    expect(consequences.recommendedRpm).toBe(5_000);
    expect(consequences.neededRateHz).toBe(12_000);
    // Hold-off of 100 us, 60 teeth, duty 0.5: 5000 rpm (formula: 0.5 / (N t)).
    expect(consequences.holdoffRpm).toBeCloseTo(5000, 9);
    expect(consequences.holdoffHz).toBeCloseTo(5000, 9);
    expect(consequences.holdoffS).toBe(0.0001);
    const narrow = consequencesOf(rig, { ...defaultSettings, holdoffS: 0.0001 }, 20_000, 1, 0.1);
    expect(narrow.holdoffRpm).toBeCloseTo(1000, 9);
  });

  it('leave open what is not known yet', () => {
    expect(consequencesOf(testRig('single', 60), defaultSettings, null)).toEqual({
      toothHz: null,
      samplesPerTooth: null,
      highestRpm: null,
      recommendedRpm: null,
      neededRateHz: null,
      lowestRpm: 0.5,
      holdoffS: null,
      holdoffHz: null,
      holdoffRpm: null,
      widths: null,
      notes: [],
    });
  });

  it('differ by arrangement: 2, 4 or 6 states that a sample must fall into (n = 60 fs / (states N), formula)', () => {
    const { wheel } = testRig('single', 64);
    const highest = (sensing: Sensing) => highestRpmAt(sensing, wheel, 10_000);
    // 64 pulses, 10 kS/s, quadrature: 2343.75 rpm; twice as many samples a state: half of that; 70 of 90 degrees: 0.778.
    expect(['single', 'quadrature', 'three-hall'].map((sensing) => highest(sensing as Sensing))).toEqual([
      4687.5, 2343.75, 1562.5,
    ]);
    expect(highestRpmAt('quadrature', wheel, 10_000, 2)).toBe(1171.875);
    expect(highestRpmAt('quadrature', wheel, 10_000, 1, 70 / 90)! / 2343.75).toBeCloseTo(0.778, 3);
    expect(highestRpmAt('quadrature', { ...wheel, gearRatio: 3 }, 10_000)).toBe(781.25);
  });

  it('are what the signal path can follow: a quadrature pair below the limit, and not above it', () => {
    const rig = testRig('quadrature', 64);
    const limit = highestRpmAt('quadrature', rig.wheel, 10_000)!;
    const band = { mode: 'fixed', operateV: 1.7, releaseV: 1.5 } as const;
    const steps = (rpm: number) => {
      const lines = [0, 0.25].map(
        (shift) => (t: number) => ((((rpm / 60) * 64 * t - shift + 0.137) % 1) + 1 > 1.5 ? 3 : 0.2),
      );
      const { motion } = openPaths(rig, 10_000, 1, lines, { settings: { band } });
      return {
        share: Math.abs(motion.tracker!.netSteps) / ((4 * 64 * rpm) / 60),
        illegal: motion.tracker!.illegalSteps,
      };
    };
    const below = steps(0.93 * limit);
    expect(below.illegal).toBe(0);
    expect(below.share).toBeGreaterThan(0.98);
    const above = steps(1.4 * limit);
    expect(above.illegal).toBeGreaterThan(1000);
    expect(above.share).toBeLessThan(0.5);
  });

  it('of widths: the rate that they take, and up to where they tell the direction', () => {
    const { widths, highestRpm, recommendedRpm, neededRateHz, holdoffRpm } = consequencesOf(
      { ...coded(48), ratedRpm: 1000 },
      { ...defaultSettings, holdoffS: 20e-6 },
      200_000,
    );
    // Four samples in 45 us; pulses of 180 us fill half of a period of 360 us.
    expect(widths!.neededRateHz).toBeCloseTo(88_888.9, 1);
    expect(widths!.isRateEnough).toBe(true);
    expect(widths!.directionUpToRpm).toBeCloseTo(60 / 48 / 360e-6, 6);
    expect(highestRpm).toBeCloseTo(60 / 48 / 185e-6, 6);
    expect(recommendedRpm).toBeCloseTo(60 / 48 / 360e-6, 6);
    expect(neededRateHz).toBeCloseTo(88_888.9, 1);
    expect(holdoffRpm).toBeCloseTo(60 / 48 / 200e-6, 6);
    const slow = consequencesOf(coded(48), { ...defaultSettings, holdoffS: 60e-6 }, 20_000);
    expect(slow.widths!.isRateEnough).toBe(false);
    expect(slow.highestRpm).toBe(0);
    expect(slow.holdoffRpm).toBe(0);
    expect(consequencesOf(coded(48), defaultSettings, null).widths!.isRateEnough).toBeNull();
    const untold = consequencesOf(testRig('width-coded', 48), defaultSettings, 20_000);
    expect(untold.widths).toBeNull();
    expect(untold.highestRpm).toBe(12_500);
  });

  it('agree with what the signal path calls stopped', () => {
    for (const missing of [0, 1]) {
      const rig = testRig('single', 6, missing);
      const pipeline = testPipeline(rig, 1000, { band: { mode: 'fixed', operateV: 1, releaseV: 0.5 } });
      const volts = Float64Array.from({ length: 5000 }, (_, i) => (i > 100 && i < 110 ? 2 : 0));
      pipeline.process([volts], volts.length);
      expect(pipeline.status().speedAtMostRpm).toBeCloseTo(
        consequencesOf(rig, defaultSettings, 1000).lowestRpm!,
        9,
      );
    }
    // A ring of states shows an edge in every quarter (sixth) of a cycle, wider where the states are not even.
    const lowest = (sensing: Sensing, share = 1) =>
      consequencesOf(testRig(sensing, 6), defaultSettings, null, share).lowestRpm;
    expect(lowest('quadrature')).toBeCloseTo(1.25, 12);
    expect(lowest('three-hall')).toBeCloseTo(5 / 6, 12);
    expect(lowest('quadrature', 0.5)).toBeCloseTo(1.875, 12);
  });

  it('of a hold-off: teeth up to its limit keep all their edges, and faster ones lose some', () => {
    const rig = testRig('single', 24);
    const holdoffS = 0.002;
    const { holdoffHz } = consequencesOf(rig, { ...defaultSettings, holdoffS }, 20_000);
    const kept = (hz: number): number => {
      const pipeline = testPipeline(rig, 20_000, {
        holdoffS,
        band: { mode: 'fixed', operateV: 0.05, releaseV: -0.05 },
      });
      pipeline.process([sampled(20_000, 20_000, (t) => Math.sin(2 * Math.PI * hz * t))], 20_000);
      return pipeline.status().pulses / hz;
    };
    expect(kept(0.95 * holdoffHz!)).toBeGreaterThan(0.99);
    expect(kept(2.3 * holdoffHz!)).toBeLessThan(0.7);
  });

  it('are null where what they rest on is refused, and the rest is told', () => {
    const at = (wheel: Partial<RigSetup['wheel']>, rateHz: number | null = 20_000, ratedRpm = 3000) => {
      const rig = testRig('single', 60);
      return consequencesOf({ ...rig, ratedRpm, wheel: { ...rig.wheel, ...wheel } }, defaultSettings, rateHz);
    };
    const wheels = [{ pulsesPerTurn: 0 }, { pulsesPerTurn: NaN }, { pulsesPerTurn: 2.5 }, { gearRatio: 0 }];
    for (const wheel of [...wheels, { gearRatio: -2 }, { missingPulses: -1 }, { missingPulses: 59 }]) {
      const { notes, ...numbers } = at(wheel);
      expect(notes).toEqual([]);
      expect(Object.values(numbers).filter((value) => value !== null)).toEqual([]);
      expect(highestRpmAt('single', { ...testRig('single', 60).wheel, ...wheel }, 20_000)).toBeNull();
    }
    for (const rateHz of [-1, 0, 0.5, 2e6, NaN, Infinity])
      expect(at({}, rateHz)).toMatchObject({
        samplesPerTooth: null,
        highestRpm: null,
        toothHz: 3000,
        lowestRpm: 0.5,
      });
    for (const ratedRpm of [0, -100, NaN, Infinity])
      expect(at({}, 20_000, ratedRpm)).toMatchObject({
        toothHz: null,
        neededRateHz: null,
        highestRpm: 10_000,
      });
    const overlapping = consequencesOf(
      { ...coded(48), ratedRpm: 100, wheel: { ...coded(48).wheel, widthClasses: [ladder[0]!, ladder[0]!] } },
      { ...defaultSettings, holdoffS: 20e-6 },
      200_000,
    );
    expect(overlapping).toMatchObject({
      widths: null,
      highestRpm: null,
      neededRateHz: null,
      holdoffHz: null,
    });
    expect(overlapping.toothHz).toBeCloseTo(80, 9);
  });

  it('are finite or null for any setup, sound or not, and null without a wheel that the validator takes', () => {
    const any = fc.oneof(
      fc.double(),
      fc.double({ min: 1e-6, max: 1e6, noNaN: true }),
      fc.constantFrom(0, -1, 0.5, 1, NaN, Infinity, -Infinity, 5e-324, 1.7e308),
    );
    const pulses = fc.oneof(fc.integer({ min: -1, max: 100_000 }), any);
    const widthClasses = fc.option(
      fc.array(fc.record({ widthS: any, means: fc.constantFrom('forward', 'reverse', 'weak' as const) }), {
        maxLength: 4,
      }),
    );
    const speed = fc.record({
      method: fc.constantFrom('tooth', 'turn', 'window' as const),
      windowS: any,
      stoppedAfterS: any,
    });
    let sound = 0;
    let refused = 0;
    fc.assert(
      fc.property(
        fc.constantFrom('single', 'quadrature', 'three-hall', 'width-coded' as const),
        fc.record({
          pulsesPerTurn: pulses,
          missingPulses: fc.oneof(fc.constant(0), fc.integer({ min: -1, max: 4 }), any),
          gearRatio: fc.oneof(fc.constant(1), any),
          widthClasses,
        }),
        fc.option(any),
        fc.record({ holdoffS: any, speed }),
        fc.option(any),
        any,
        any,
        (sensing, wheel, ratedRpm, settings, rateHz, stateShare, halfShare) => {
          const found = consequencesOf({ sensing, wheel, ratedRpm }, settings, rateHz, stateShare, halfShare);
          const limits = speedLimits({ sensing, wheel }, settings.speed, rateHz, ratedRpm);
          const highest = highestRpmAt(sensing, wheel, rateHz ?? 1000, 2, stateShare);
          const { widths, ...rest } = found;
          const numbers = Object.values(rest).filter((value) => !Array.isArray(value));
          const ofWheel = [...numbers, widths, highest, ...Object.values(limits)];
          for (const value of [...ofWheel, ...Object.values(widths ?? {})])
            if (typeof value === 'number') expect(value >= 0 && value < Infinity).toBe(true);
          if (turnIssue({ sensing, wheel })) {
            refused++;
            expect(ofWheel.filter((value) => value !== null && value !== found.holdoffS)).toEqual([]);
          } else sound++;
          if (rateIssue(rateHz))
            expect([found.highestRpm, found.samplesPerTooth, highest]).toEqual([null, null, null]);
        },
      ),
      { numRuns: 1000 },
    );
    expect(Math.min(sound, refused)).toBeGreaterThan(50);
  });
});

describe('kinds of sensors', () => {
  const notesOf = (kind: 'linear' | 'switch' | 'latch' | 'omnipolar', activeLow: boolean) => {
    const channel = testChannel('A', 'A');
    const rig = {
      ...testRig('single', 8),
      channels: [{ ...channel, sensor: { ...channel.sensor, kind, activeLow } }],
    };
    return consequencesOf(rig, defaultSettings, null).notes.map(({ code }) => code);
  };

  it('say what they do to count and polarity', () => {
    expect(notesOf('linear', false)).toEqual([]);
    expect(notesOf('linear', true)).toEqual(['linear-has-no-low']);
    expect(notesOf('switch', true)).toEqual([]);
    expect(notesOf('switch', false)).toEqual(['open-drain-is-low']);
    expect(notesOf('latch', true)).toEqual(['needs-alternate-poles']);
    expect(notesOf('omnipolar', true)).toEqual(['counts-both-poles']);
    expect(notesOf('omnipolar', false)).toEqual(['counts-both-poles', 'open-drain-is-low']);
  });

  it('count as they switch: thresholds held against a field that swings between two poles', () => {
    // Operate and release by kind (common practice), over ten pole pairs of +-40 mT, then over ten like poles of 0 to 40 mT.
    const pulses = (kind: 'switch' | 'latch' | 'omnipolar', fieldMt: (turns: number) => number): number => {
      let on = false;
      let count = 0;
      for (let i = 0; i <= 20_000; i++) {
        const raw = fieldMt(i / 20_000);
        const field = kind === 'omnipolar' ? Math.abs(raw) : raw;
        if (!on && field > 20) {
          on = true;
          count++;
        } else if (on && field < (kind === 'latch' ? -20 : 10)) {
          on = false;
        }
      }
      return count;
    };
    for (const kind of ['switch', 'latch', 'omnipolar'] as const) {
      expect(pulses(kind, (turns) => 40 * Math.sin(20 * Math.PI * turns))).toBe(10 * pulsesPerPolePair(kind));
      // A latch that is on stays on: one pulse at the first magnet, and none for the others.
      const like = pulses(kind, (turns) => 20 - 20 * Math.cos(20 * Math.PI * turns));
      expect(like).toBe(kind === 'latch' ? 1 : 10 * pulsesPerLikePole(kind));
    }
  });
});
