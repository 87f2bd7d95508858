/** How shafts turn in these runs. */
import type { MotionSpec } from '@/simulator/motion';

/** One speed for ever. */
export function steady(rpm: number): MotionSpec {
  return { startRpm: rpm, segments: [{ durationS: 1000, toRpm: rpm }] };
}

/** Down to half the speed and up again, for ever. */
export function ramping(rpm: number): MotionSpec {
  return {
    startRpm: rpm,
    segments: [
      { durationS: 1.5, toRpm: rpm / 2 },
      { durationS: 2, toRpm: rpm },
    ],
  };
}

/** Stands, runs up evenly and goes on. */
export function fromRest(rpm: number, standS: number, rampS: number): MotionSpec {
  return {
    startRpm: 0,
    segments: [
      { durationS: standS, toRpm: 0 },
      { durationS: rampS, toRpm: rpm },
      { durationS: 1000, toRpm: rpm },
      { durationS: 1, toRpm: 0 },
    ],
  };
}

/** Goes on at one speed, slows evenly to another (0: stops) and stays there. */
export function slowing(rpm: number, steadyS: number, slowS: number, endRpm: number): MotionSpec {
  return {
    startRpm: rpm,
    segments: [
      { durationS: steadyS, toRpm: rpm },
      { durationS: slowS, toRpm: endRpm },
      { durationS: 1000, toRpm: endRpm },
      { durationS: 1, toRpm: rpm },
    ],
  };
}
