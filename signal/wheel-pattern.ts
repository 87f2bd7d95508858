/**
 * After how many teeth a wheel repeats itself, from what makes its teeth different: spacing and swing. A wheel that is said
 * to have N positions but repeats after another number has that many.
 *
 * Correlated is, for each tooth, the sum of the two intervals about it less the two outside of them: a shaft that sways or
 * speeds up leaves next to nothing of that, nor do teeth that alternate (poles of both kinds, counted alike), which would
 * repeat after any even number. Lags are N p / q with p and q up to 8. What looks like another number is looked at once more
 * from close by, since hum and a geared shaft repeat too. Wheels without a gap only: a gap tells it by itself.
 */
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';
import { LagCorrelation, toneReach, unlikeTone } from '@/signal/wheel-correlation';

/**
 * Wheels of fewer positions are not looked at, since a sway of the shaft is as quick as their teeth differ, nor of more: the
 * ring would be long.
 */
export const fewestPatternPositions = 12;
export const mostPatternPositions = 512;
const shortestLag = 6;
const mostFactor = 8;
/** Times N: nobody sets up a quarter of the teeth. */
const longestLag = 4;
const fewestTeeth = 200;
const turnsNeeded = 8;
/** A wider step than this is a tooth that is missing, or a pulse too many. */
const wildest = 0.3;
/** So many times what errors of the instants make: less may be a pattern of the sample grid. */
const leastOverError = 4;
/** Correlation from which a lag repeats, and how near to the best one. */
const repeats = 0.6;
const nearBest = 0.1;
/** At N another wheel's teeth have nothing in common; a tone that a geared shaft makes beside the teeth is all against. */
const mostAsSet = 0.3;
const leastAsSet = -0.35;
const leastUnlikeTone = 0.1;
/** A part of N is not believed where the other orders make the difference at it so many times larger than at N. */
const mostUnlike = 1.3;
const leastUnlike = 0.005;

type Signal = 'spacing' | 'swing';
export type PatternVerdict = {
  /** Teeth after which the wheel repeats itself. */
  lag: number;
  by: Signal;
  correlation: number;
  /** At the number that was set up. */
  correlationAsSet: number;
  turns: number;
};

export class WheelPattern {
  /** Of the last whole look; null: nothing speaks against the number that was set up. */
  verdict: PatternVerdict | null = null;
  private teeth = 0;
  private readonly positions: number;
  private readonly takesSwing: boolean;
  private readonly wide: Record<Signal, LagCorrelation>;
  /** Of the lag that is looked at from close by, which is the second one; null: none is. */
  private close: LagCorrelation | null = null;
  private suspect: PatternVerdict | null = null;
  private next = 0;

  /** @param takesSwing the swing is the teeth's own: that of a switching sensor is not. */
  constructor(positions: number, takesSwing: boolean) {
    this.positions = positions;
    this.takesSwing = takesSwing;
    const lags = new Set([positions]);
    for (let p = 1; p <= mostFactor; p++)
      for (let q = 1; q <= mostFactor; q++) {
        const lag = (positions * p) / q;
        if (Number.isInteger(lag) && lag >= shortestLag && lag <= longestLag * positions) lags.add(lag);
      }
    const sorted = [...lags].sort((a, b) => a - b);
    this.wide = { spacing: new LagCorrelation(sorted), swing: new LagCorrelation(sorted) };
  }

  /** Begins anew behind the last tooth of the log. */
  restart(log: ToothLog): void {
    this.next = log.count;
    this.close = this.suspect = null;
    this.clear();
  }

  /** Passes over the teeth that have come, where none has been taken since it began anew. */
  skip(log: ToothLog): void {
    if (this.teeth > 0 || this.close) this.restart(log);
    else this.next = log.count;
  }

  /**
   * Takes the teeth that have come.
   * @returns true where the look is over: `verdict` is new.
   */
  read(log: ToothLog): boolean {
    const from = readableFrom(log, this.next);
    if (from !== this.next) {
      this.next = from;
      this.clear();
    }
    // Two teeth on either side, and the last one has not ended yet.
    const to = log.count - 3;
    for (let n = Math.max(this.next, readableFrom(log, 0) + 2); n < to; n++) {
      this.next = n + 1;
      this.take(log, n);
    }
    return this.close ? this.judgeClose(this.close) : this.judgeWide();
  }

  private take({ mask, riseS, sigmaS, peakV, troughV }: ToothLog, n: number): void {
    const a = (n - 2) & mask;
    const b = (n - 1) & mask;
    const c = n & mask;
    const d = (n + 1) & mask;
    const spanS = riseS[(n + 2) & mask]! - riseS[a]!;
    const step = (2 * (riseS[d]! - riseS[b]!)) / spanS - 1;
    if (!(Math.abs(step) < wildest)) {
      this.clear();
      return;
    }
    this.teeth++;
    const { close, suspect } = this;
    if (!close || suspect?.by === 'spacing') {
      const error = (Math.sqrt(10) * (sigmaS[c]! || 0)) / spanS;
      (close ?? this.wide.spacing).add(step, error);
    }
    if (this.takesSwing && (!close || suspect?.by === 'swing')) {
      const outer = peakV[a]! - troughV[a]! + peakV[d]! - troughV[d]!;
      const inner = peakV[b]! - troughV[b]! + peakV[c]! - troughV[c]!;
      (close ?? this.wide.swing).add((inner - outer) / (inner + outer), 0);
    }
  }

  private clear(): void {
    this.teeth = 0;
    this.wide.spacing.clear();
    this.wide.swing.clear();
    this.close?.clear();
  }

  private judgeWide(): boolean {
    const { teeth, positions, wide } = this;
    if (teeth < Math.max(fewestTeeth, 2 * turnsNeeded * positions)) return false;
    const suspect = lagOf(wide.spacing, 'spacing', positions) ?? lagOf(wide.swing, 'swing', positions);
    const { lags } = wide.spacing;
    const isLong = teeth >= 2 * turnsNeeded * lags[lags.length - 1]!;
    // A pattern at N is soon plain. Others take as many turns of the number that they would speak for.
    if (!suspect && !isLong && !isAsSet(wide, positions)) return false;
    this.suspect = suspect;
    if (suspect) {
      const { lag } = suspect;
      const beside = Array.from({ length: toneReach }, (_, k) => [lag - k - 1, lag + k + 1]).flat();
      this.close = new LagCorrelation([positions, lag, ...beside]);
    } else {
      this.verdict = null;
    }
    this.clear();
    return !suspect;
  }

  private judgeClose(close: LagCorrelation): boolean {
    const { teeth, positions, suspect } = this;
    if (!suspect || teeth < Math.max(fewestTeeth, turnsNeeded * positions, turnsNeeded * suspect.lag))
      return false;
    const here = close.at(1);
    const there = close.at(0);
    const beside = Array.from(
      { length: toneReach },
      (_, k) => (close.at(2 + 2 * k) + close.at(3 + 2 * k)) / (2 * here),
    );
    const holds =
      here > repeats &&
      isAnother(suspect.lag, positions, here, there) &&
      unlikeTone(beside) > leastUnlikeTone;
    this.verdict = holds
      ? {
          ...suspect,
          correlation: here,
          correlationAsSet: there,
          turns: suspect.turns + Math.floor(teeth / suspect.lag),
        }
      : null;
    this.close = this.suspect = null;
    this.clear();
    return true;
  }
}

function isAsSet(wide: Record<Signal, LagCorrelation>, positions: number): boolean {
  const i = wide.spacing.lags.indexOf(positions);
  return Math.max(wide.spacing.at(i), wide.swing.at(i)) > repeats;
}

/** The shortest lag at which the wheel repeats about as well as anywhere, where that is not N. */
function lagOf(correlation: LagCorrelation, by: Signal, positions: number): PatternVerdict | null {
  const { lags } = correlation;
  if (correlation.overError < leastOverError) return null;
  const asSet = lags.indexOf(positions);
  if (!isReady(correlation, asSet)) return null;
  let bestAt = -Infinity;
  for (let i = 0; i < lags.length; i++) {
    if (!isReady(correlation, i)) continue;
    const at = correlation.at(i);
    if (at > bestAt) bestAt = at;
  }
  if (!(bestAt > repeats)) return null;
  let i = 0;
  while (!(isReady(correlation, i) && correlation.at(i) > bestAt - nearBest)) i++;
  const lag = lags[i]!;
  const here = correlation.at(i);
  const there = correlation.at(asSet);
  if (lag === positions || !isAnother(lag, positions, here, there)) return null;
  return {
    lag,
    by,
    correlation: here,
    correlationAsSet: there,
    turns: Math.floor(correlation.pairs(i) / lag),
  };
}

/** Over so many pairs a correlation at the lag with the index `i` is one. */
function isReady(correlation: LagCorrelation, i: number): boolean {
  return correlation.pairs(i) >= Math.max(fewestTeeth, turnsNeeded * correlation.lags[i]!);
}

function isAnother(lag: number, positions: number, here: number, there: number): boolean {
  if (positions % lag === 0) return 1 - here <= Math.max(leastUnlike, mostUnlike * (1 - there));
  return there < mostAsSet && there > leastAsSet;
}
