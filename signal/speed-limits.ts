/**
 * What a way to take the speed can resolve, how late it is, and how slow it reads before it says `stopped`: for the setup
 * form and beside the number, from settings, wheel, rate and present speed alone.
 *
 *     tooth    step N n^2 / (60 fc - N n)      delay half an interval between teeth
 *     turn     step n / (fc T - 1), T a turn   delay half a turn
 *     window   the same, T the teeth in it     delay half of what they span: K teeth within the window, one interval at least
 *     floor    60 p / (N t), t the time until stopped, p the positions without an edge: 1 and the missing
 *              ones, a state of a ring
 *
 * N: positions for one turn of the shaft. fc: what instants are rounded to; the sample rate, as for a switching sensor. Edges
 * of a linear sensor lie between samples and resolve finer, down to what `errorRpm` says.
 * Sources: formulas; Ohmae et al., IEEE Trans. IE-29 (1982) 207-211 (from memory) for turn and window.
 */
import { consequencesOf } from '@/signal/consequences';
import type { RigSetup, Settings } from '@/signal/model';
import { gateResolution, periodResolution } from '@/signal/statistics/speed-resolution';
import { turnIssue } from '@/signal/validate-rig';
import { rateIssue, speedIssue } from '@/signal/validate-timing';

export type SpeedLimits = {
  /** Smallest difference that it can show, rpm; null where rate or speed are not known, or teeth are faster than samples. */
  resolutionRpm: number | null;
  /** How far back the instant lies that the speed holds for, s; null where the speed is not known. */
  delayS: number | null;
  /** Slower than this reads stopped, rpm; null where the setup is refused. */
  floorRpm: number | null;
};

/**
 * Every number is finite or null; null throughout for a wheel or a way to take the speed that `validateSetup` refuses.
 * @param speed method, window and time until stopped. @param rateHz samples a second; null: not known.
 * @param rpm present speed of the shaft, of either sign; null or 0: not known.
 */
export function speedLimits(
  { sensing, wheel }: Pick<RigSetup, 'sensing' | 'wheel'>,
  { method, windowS, stoppedAfterS }: Settings['speed'],
  rateHz: number | null,
  rpm: number | null,
): SpeedLimits {
  const unknown = { resolutionRpm: null, delayS: null, floorRpm: null };
  if (turnIssue({ sensing, wheel }) || speedIssue({ speed: { method, windowS, stoppedAfterS } }))
    return unknown;
  const positions = wheel.pulsesPerTurn * wheel.gearRatio;
  const { lowestRpm: floorRpm } = consequencesOf(
    { sensing, wheel, ratedRpm: null },
    { holdoffS: 0, speed: { method, windowS, stoppedAfterS } },
    null,
  );
  const speed = Math.abs(rpm ?? 0);
  if (!(speed > 0 && speed < Infinity)) return { resolutionRpm: null, delayS: null, floorRpm };
  const perPositionS = 60 / (positions * speed);
  const intervals = intervalsOf(method, wheel.pulsesPerTurn, windowS / perPositionS);
  const delayS = (intervals * perPositionS) / 2;
  if (!(delayS < Infinity)) return { resolutionRpm: null, delayS: null, floorRpm };
  if (rateHz === null || rateIssue(rateHz)) return { resolutionRpm: null, delayS, floorRpm };
  const found =
    method === 'tooth'
      ? periodResolution(speed, positions, rateHz, stoppedAfterS)
      : gateResolution(speed, positions, rateHz, intervals * perPositionS, stoppedAfterS);
  const stepRpm = found.ok ? found.value.stepRpm : NaN;
  return { resolutionRpm: Number.isFinite(stepRpm) ? stepRpm : null, delayS, floorRpm };
}

function intervalsOf(method: Settings['speed']['method'], pulsesPerTurn: number, inWindow: number): number {
  switch (method) {
    case 'tooth':
      return 1;
    case 'turn':
      return pulsesPerTurn;
    case 'window':
      // A window that is a whole number of intervals but for its rounding holds all of them.
      return Math.max(1, Math.floor(inWindow * (1 + 4 * Number.EPSILON)));
  }
}
