/**
 * What each way to take a speed can resolve, how late it is and how slow it can read, before a single edge is seen.
 *
 *     count in a fixed gate   step 60 / (N T)                 delay T / 2         floor: one edge a gate
 *     one period by a clock   step N n^2 / (60 fc - N n)      delay half a period floor: the stop time
 *     gate from edge to edge  step n / (fc T - 1)             delay half the gate that edges make of it
 *
 * The clock is what instants are rounded to: for interpolated edges 1 / their standard error is a fair stand-in.
 * Sources: formulas; Ohmae et al., IEEE Trans. IE-29 (1982) 207-211 (from memory) for the third.
 */
import { got, notPositive, refused, type Outcome } from '@/signal/statistics/issue';

export type SpeedResolution = {
  /** Smallest difference that it can show at this speed, rev/min. */
  stepRpm: number;
  /** How far back the instant lies that the speed holds for, s. */
  delayS: number;
  /** Slowest speed that it can read, rev/min. */
  floorRpm: number;
};

/** Edges counted in a gate of fixed length; a reference for check values, no speed of the product is taken so. Issues: bad-setting. */
export function countResolution(gateS: number, positions: number): Outcome<SpeedResolution> {
  const bad = notPositive(gateS, 'gate') ?? notPositive(positions, 'positions a turn');
  if (bad) return bad;
  const stepRpm = 60 / (positions * gateS);
  return got({ stepRpm, delayS: gateS / 2, floorRpm: stepRpm });
}

/** Edges that such a gate holds at `rpm`, the started one left out; a reference as well. Issues: bad-setting. */
export function edgesInGate(rpm: number, gateS: number, positions: number): Outcome<number> {
  const bad =
    notPositive(rpm, 'speed') ?? notPositive(gateS, 'gate') ?? notPositive(positions, 'positions a turn');
  if (bad) return bad;
  // A product that is whole but for its rounding counts as whole.
  const edges = (positions * rpm * gateS) / 60;
  return got(Math.floor(edges * (1 + 4 * Number.EPSILON)));
}

/** One period measured by a clock. Issues: bad-setting, too-few (a period shorter than two ticks). */
export function periodResolution(
  rpm: number,
  positions: number,
  clockHz: number,
  stoppedAfterS: number,
): Outcome<SpeedResolution> {
  const bad =
    notPositive(rpm, 'speed') ??
    notPositive(positions, 'positions a turn') ??
    notPositive(clockHz, 'clock') ??
    notPositive(stoppedAfterS, 'stop time');
  if (bad) return bad;
  const edgesPerMinute = positions * rpm;
  if (60 * clockHz < 2 * edgesPerMinute)
    return refused('too-few', 'a period shorter than two ticks of the clock');
  return got({
    stepRpm: (positions * rpm * rpm) / (60 * clockHz - edgesPerMinute),
    delayS: 30 / edgesPerMinute,
    floorRpm: 60 / (positions * stoppedAfterS),
  });
}

/** A gate of `leastGateS` at least, from edge to edge. Issues: bad-setting, too-few (a gate shorter than two ticks). */
export function gateResolution(
  rpm: number,
  positions: number,
  clockHz: number,
  leastGateS: number,
  stoppedAfterS: number,
): Outcome<SpeedResolution> {
  const bad =
    notPositive(rpm, 'speed') ??
    notPositive(positions, 'positions a turn') ??
    notPositive(clockHz, 'clock') ??
    notPositive(leastGateS, 'gate') ??
    notPositive(stoppedAfterS, 'stop time');
  if (bad) return bad;
  if (clockHz * leastGateS < 2) return refused('too-few', 'a gate shorter than two ticks of the clock');
  const periodS = 60 / (positions * rpm);
  const gateS = periodS * Math.ceil((leastGateS / periodS) * (1 - 4 * Number.EPSILON));
  return got({
    stepRpm: rpm / (clockHz * leastGateS - 1),
    delayS: gateS / 2,
    floorRpm: 60 / (positions * stoppedAfterS),
  });
}
