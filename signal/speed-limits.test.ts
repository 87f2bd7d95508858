import { describe, expect, it } from 'vitest';
import { consequencesOf } from '@/signal/consequences';
import { defaultSettings } from '@/signal/model';
import type { SpeedMethod } from '@/signal/model';
import { speedLimits } from '@/signal/speed-limits';
import { sampled, testPipeline, testRig, toothWheel } from '@/signal/test-signals';

const speed = (method: SpeedMethod, windowS = 0.1, stoppedAfterS = 1) => ({ method, windowS, stoppedAfterS });
const wheel60 = testRig('single', 60);

describe('what a way to take the speed can resolve', () => {
  it('60 teeth by a 1 MHz clock: 2.25 rpm a tooth at 1500 rpm, 0.0025 at 50, 228 at 15 000 (formula of the T method)', () => {
    const step = (rpm: number) => speedLimits(wheel60, speed('tooth'), 1e6, rpm).resolutionRpm!;
    expect(step(1500)).toBeCloseTo(2.2534, 4);
    expect(step(50)).toBeCloseTo(0.0025, 5);
    expect(step(15_000)).toBeCloseTo(228.43, 2);
    expect(step(-1500)).toBe(step(1500));
  });

  it('a window of 0.1 s: 0.015 rpm and 50 ms late at 1500 rpm (formula of the M/T method)', () => {
    const limits = speedLimits(wheel60, speed('window'), 1e6, 1500);
    expect(limits.resolutionRpm).toBeCloseTo(1500 / 99_999, 9);
    expect(limits.delayS).toBeCloseTo(0.05, 12);
  });

  it('a turn of 40 ms: 0.0375 rpm and 20 ms late (formula)', () => {
    const limits = speedLimits(wheel60, speed('turn'), 1e6, 1500);
    expect(limits.resolutionRpm).toBeCloseTo(1500 / 39_999, 9);
    expect(limits.delayS).toBeCloseTo(0.02, 12);
  });

  it('one tooth is half its interval late; a window too short for two teeth is no better', () => {
    expect(speedLimits(wheel60, speed('tooth'), 1e6, 100).delayS).toBeCloseTo(0.005, 12);
    expect(speedLimits(wheel60, speed('window', 0.004), 1e6, 100).delayS).toBeCloseTo(0.005, 12);
    expect(speedLimits(wheel60, speed('window', 0.025), 1e6, 100).delayS).toBeCloseTo(0.01, 12);
  });

  it('a second until stopped: 60, 1.667 and 1 rpm with 1, 36 and 60 teeth, 3 with 60 - 2 (formula)', () => {
    const floor = (n: number, missing = 0) =>
      speedLimits(testRig('single', n, missing), speed('turn'), 20_000, 100).floorRpm;
    expect(floor(1)).toBe(60);
    expect(floor(36)).toBeCloseTo(1.6667, 4);
    expect(floor(60)).toBe(1);
    expect(floor(60, 2)).toBe(3);
  });

  it('is the floor that the setup form tells, gears included', () => {
    for (const rig of [testRig('quadrature', 64), testRig('three-hall', 4), testRig('single', 36, 1)]) {
      rig.wheel.gearRatio = 2.5;
      expect(speedLimits(rig, defaultSettings.speed, null, null).floorRpm).toBeCloseTo(
        consequencesOf(rig, defaultSettings, null).lowestRpm!,
        12,
      );
    }
  });

  it('does not tell what it cannot know', () => {
    expect(speedLimits(wheel60, speed('turn'), 20_000, null)).toEqual({
      resolutionRpm: null,
      delayS: null,
      floorRpm: 1,
    });
    expect(speedLimits(wheel60, speed('turn'), 20_000, 0).delayS).toBeNull();
    expect(speedLimits(wheel60, speed('turn'), 20_000, NaN).delayS).toBeNull();
    expect(speedLimits(wheel60, speed('turn'), null, 100)).toMatchObject({
      resolutionRpm: null,
      delayS: 0.3,
    });
    expect(speedLimits(wheel60, speed('tooth'), 1000, 30_000).resolutionRpm).toBeNull();
  });

  it('says nothing of a setup that is refused', () => {
    const nothing = { resolutionRpm: null, delayS: null, floorRpm: null };
    for (const wheel of [
      { pulsesPerTurn: 0 },
      { pulsesPerTurn: NaN },
      { gearRatio: 0 },
      { missingPulses: -1 },
    ]) {
      const rig = { ...wheel60, wheel: { ...wheel60.wheel, ...wheel } };
      expect(speedLimits(rig, speed('turn'), 20_000, 100)).toEqual(nothing);
    }
    expect(speedLimits(wheel60, speed('turn', 0.1, 0), 20_000, 100)).toEqual(nothing);
    expect(speedLimits(wheel60, speed('window', NaN), 20_000, 100)).toEqual(nothing);
    for (const rateHz of [-1, NaN, Infinity])
      expect(speedLimits(wheel60, speed('turn'), rateHz, 100)).toEqual({
        resolutionRpm: null,
        delayS: 0.3,
        floorRpm: 1,
      });
  });

  it('a ramp is read as late as that: the speed shown is the one of so long ago', () => {
    const rateHz = 20_000;
    for (const [method, within] of [
      ['tooth', 0.002],
      ['turn', 0.002],
      ['window', 0.005],
    ] as const) {
      const pipeline = testPipeline(wheel60, rateHz, { speed: { method, windowS: 0.05, stoppedAfterS: 2 } });
      const volts = sampled(
        2 * rateHz,
        rateHz,
        toothWheel(60, 0, (t) => 5 * t + t * t),
      );
      pipeline.process([volts], volts.length);
      const { t, rpm, count } = pipeline.output.speed;
      const last = count - 1;
      const truth = (at: number) => 60 * (5 + 2 * at);
      const { delayS } = speedLimits(
        wheel60,
        { method, windowS: 0.05, stoppedAfterS: 2 },
        rateHz,
        rpm[last]!,
      );
      // Instants of teeth make a window a little shorter than it was set.
      expect(Math.abs(t[last]! - (rpm[last]! / 60 - 5) / 2 - delayS!)).toBeLessThan(within);
      expect(rpm[last]).toBeLessThan(truth(t[last]!));
    }
  });
});
