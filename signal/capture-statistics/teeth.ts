/** Statistics of the speed channel's teeth over a stretch: jitter, turns, and what repeats with the shaft. */
import type { CaptureStatistics, JitterStatistics, OrderLine } from '@/signal/capture-statistics/shapes';
import type { WheelTurns } from '@/signal/capture-statistics/wheel-turns';
import type { Wheel } from '@/signal/model';
import {
  cycleToCycleJitter,
  jitterShares,
  periodJitter,
  timeIntervalError,
  withoutTrend,
} from '@/signal/statistics/jitter';
import { orderSpectrum, type OrderSpectrum } from '@/signal/statistics/order-spectrum';
import { speedPerTurn } from '@/signal/statistics/per-turn';

const turnsForPattern = 5;
/** Orders that are listed: the strongest of them, in order. */
const mostLines = 12;

/**
 * Jitter of `teethS`, piece by piece (four turns, 64 teeth at least), so that the speed's own sway counts as little as can
 * be: of each piece an even change of the period is taken out, and, from five turns on, each position's own mean error.
 * @param turns null: nothing is known of turns. A wheel with missing teeth is judged by whole turns only.
 */
export function toothJitter(
  teethS: readonly number[],
  turns: WheelTurns | null,
  { missingPulses, pulsesPerTurn }: Wheel,
): JitterStatistics | null {
  const patterned = turns !== null && turns.turns >= turnsForPattern;
  if (missingPulses > 0 && !patterned) return null;
  const instants = patterned ? withoutPattern(turns) : teethS;
  const pieceTeeth = Math.max(64, 4 * (pulsesPerTurn - missingPulses));
  const pool = new JitterPool();
  for (let from = 0; from + 4 <= instants.length; from += pieceTeeth)
    pool.add(instants.slice(from, from + pieceTeeth + 1));
  return pool.read(patterned);
}

/** Sums of squares over pieces. */
class JitterPool {
  private teeth = 0;
  private spanS = 0;
  private periods = 0;
  private changes = 0;
  private periodSquares = 0;
  private changeSquares = 0;
  private errorSquares = 0;
  private peakToPeakS = 0;
  private mostS = 0;

  add(piece: readonly number[]): void {
    const flat = withoutTrend(piece);
    const error = timeIntervalError(piece, 'drifting');
    if (!flat.ok || !error.ok) return;
    const period = periodJitter(flat.value);
    const change = cycleToCycleJitter(flat.value);
    if (!period.ok || !change.ok) return;
    this.teeth += piece.length;
    this.periods += period.value.periods;
    this.changes += change.value.pairs;
    this.spanS += period.value.periods * period.value.meanS;
    this.periodSquares += period.value.periods * period.value.rmsS ** 2;
    this.changeSquares += change.value.pairs * change.value.rmsS ** 2;
    this.errorSquares += piece.length * error.value.rmsS ** 2;
    this.peakToPeakS = Math.max(this.peakToPeakS, period.value.peakToPeakS);
    this.mostS = Math.max(this.mostS, change.value.mostS);
  }

  read(withoutOwnPattern: boolean): JitterStatistics | null {
    if (this.teeth === 0) return null;
    const errorRmsS = Math.sqrt(this.errorSquares / this.teeth);
    return {
      teeth: this.teeth,
      periodRmsS: Math.sqrt(this.periodSquares / this.periods),
      periodPeakToPeakS: this.peakToPeakS,
      cycleToCycleRmsS: Math.sqrt(this.changeSquares / this.changes),
      cycleToCycleMostS: this.mostS,
      timeIntervalErrorRmsS: errorRmsS,
      timeIntervalErrorToothDeg: jitterShares(errorRmsS, this.spanS / this.periods).toothDeg,
      withoutPattern: withoutOwnPattern,
    };
  }
}

/**
 * Each tooth's instant with the mean error of its position taken off, and with the missing positions left out as if the
 * wheel had only its teeth, evenly spaced: period by period what is left is noise and the sway of the speed.
 */
function withoutPattern({ turns, teeth, teethS }: WheelTurns): number[] {
  const shares = new Float64Array(teeth);
  for (let turn = 0; turn < turns; turn++) {
    const begin = teethS[turn * teeth]!;
    const turnS = teethS[(turn + 1) * teeth]! - begin;
    for (let k = 0; k < teeth; k++) shares[k]! += (teethS[turn * teeth + k]! - begin) / turnS / turns;
  }
  return teethS.map((t, index) => {
    const turn = Math.min(turns - 1, Math.floor(index / teeth));
    const k = index - turn * teeth;
    if (k === teeth) return t;
    const turnS = teethS[(turn + 1) * teeth]! - teethS[turn * teeth]!;
    return t - (shares[k]! - k / teeth) * turnS;
  });
}

/**
 * Mean speed of each whole turn, rpm of the shaft, at the turn's end, s. Empty where there is no whole turn.
 * @param sign -1 where the shaft turned in reverse.
 */
export function turnSpeeds(
  turns: WheelTurns | null,
  gearRatio: number,
  sign: 1 | -1,
): CaptureStatistics['turns'] {
  if (!turns) return [];
  const speeds = speedPerTurn(turns.teethS, turns.teeth, gearRatio);
  if (!speeds.ok) return [];
  return Array.from(speeds.value.endS, (t, k) => ({ t, rpm: sign * speeds.value.rpm[k]! }));
}

/** What of the speed repeats with the shaft, tooth by tooth. */
export function speedOrders(
  turns: WheelTurns | null,
  { pulsesPerTurn, missingPulses, gearRatio }: Wheel,
): CaptureStatistics['speedOrders'] {
  if (!turns) return null;
  const { teeth, teethS } = turns;
  const values = new Float64Array(turns.turns * pulsesPerTurn);
  for (let turn = 0; turn < turns.turns; turn++) {
    for (let k = 0; k < teeth; k++) {
      const from = turn * teeth + k;
      const spans = k === teeth - 1 ? missingPulses + 1 : 1;
      const rpm = (60 * spans) / (pulsesPerTurn * gearRatio * (teethS[from + 1]! - teethS[from]!));
      for (let p = 0; p < spans; p++) values[turn * pulsesPerTurn + k + p] = rpm;
    }
  }
  const spectrum = orderSpectrum(values, pulsesPerTurn);
  if (!spectrum.ok) return null;
  return { turns: turns.turns, meanRpm: spectrum.value.mean, lines: strongest(spectrum.value) };
}

/** The strongest orders of a spectrum, in rising order; the mean is none of them. */
export function strongest({ amplitude, phaseRad }: OrderSpectrum): OrderLine[] {
  return Array.from(amplitude, (size, order) => ({
    order,
    amplitude: size,
    phaseDeg: (phaseRad[order]! * 180) / Math.PI,
  }))
    .slice(1)
    .sort((a, b) => b.amplitude - a.amplitude)
    .slice(0, mostLines)
    .sort((a, b) => a.order - b.order);
}
