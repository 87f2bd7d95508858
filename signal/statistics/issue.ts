/**
 * What every statistic here answers with: a value, or an issue that says why there is none. Data that cannot carry the
 * number asked for is never an exception and never a guess.
 */
import type { Failed, Ok, Result } from '@/signal/model';

export type StatisticsIssueCode =
  /** A setting of the call itself is outside its range. */
  | 'bad-setting'
  /** A NaN or an infinity among the data. */
  | 'not-finite'
  /** Fewer samples, edges or turns than the number needs. */
  | 'too-few'
  /** Instants that should rise do not. */
  | 'not-ascending'
  | 'no-two-states'
  /** Nothing periodic stands out of the noise. */
  | 'no-swing'
  /** The data do not pin the unknowns down (a fraction of a cycle, one and the same place over and over). */
  | 'undetermined'
  | 'not-converged'
  | 'not-steady'
  | 'not-stable'
  | 'no-match'
  | 'ambiguous'
  | 'rate-too-low'
  /** The signal asked for lies outside the samples given. */
  | 'outside';

export type StatisticsIssue = { code: StatisticsIssueCode; detail: string };
export type Outcome<T> = Result<T, StatisticsIssue>;

export function got<T>(value: T): Ok<T> {
  return { ok: true, value };
}

export function refused(code: StatisticsIssueCode, detail: string): Failed<StatisticsIssue> {
  return { ok: false, issue: { code, detail } };
}

/** The first number that is not finite, as an issue; null where all are. */
export function notFinite(values: ArrayLike<number>, what: string): Failed<StatisticsIssue> | null {
  for (let i = 0; i < values.length; i++) {
    if (!Number.isFinite(values[i]!)) return refused('not-finite', `${what} ${i} is ${values[i]}`);
  }
  return null;
}

/** Fewer than `least` numbers, one that is not finite, or one that does not rise above the one before. */
export function notInstants(
  instantsS: ArrayLike<number>,
  least: number,
  what: string,
): Failed<StatisticsIssue> | null {
  if (instantsS.length < least)
    return refused('too-few', `${what}: ${instantsS.length} given, ${least} needed`);
  const bad = notFinite(instantsS, what);
  if (bad) return bad;
  for (let i = 1; i < instantsS.length; i++) {
    if (!(instantsS[i]! > instantsS[i - 1]!)) {
      return refused(
        'not-ascending',
        `${what} ${i} at ${instantsS[i]} s is not after the one before, at ${instantsS[i - 1]} s`,
      );
    }
  }
  return null;
}

/** Not a finite number above zero. */
export function notPositive(value: number, what: string): Failed<StatisticsIssue> | null {
  return Number.isFinite(value) && value > 0
    ? null
    : refused('bad-setting', `${what} must be a finite number above 0, not ${value}`);
}

/** Not a whole number of at least `least`. */
export function notCount(value: number, least: number, what: string): Failed<StatisticsIssue> | null {
  return Number.isSafeInteger(value) && value >= least
    ? null
    : refused('bad-setting', `${what} must be a whole number of at least ${least}, not ${value}`);
}
