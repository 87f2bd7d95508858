/**
 * What every statistic here answers with: a value, or an issue that says why there is none. Data that cannot carry the
 * number asked for is never an exception and never a guess.
 */
import type { Failed, Ok, Result } from '@/signal/model';

export type StatisticsIssueCode =
  /** A setting of the call itself is outside its range. */
  | 'bad-setting'
  /** A NaN, an infinity or a number beyond 1e15 among the data. */
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

/** An answer. */
export function got<T>(value: T): Ok<T> {
  return { ok: true, value };
}

/** Why there is none: the code for programs, `detail` in words for people, with the numbers that decided. */
export function refused(code: StatisticsIssueCode, detail: string): Failed<StatisticsIssue> {
  return { ok: false, issue: { code, detail } };
}

/** Beyond it no voltage, count or instant can be; squares and sums of smaller ones stay within the range of a double. */
const mostNumber = 1e15;
/** Instants nearer than this, s, are one and the same: a quotient by their distance would leave that range. */
const leastApartS = 1e-12;

/** The first number that is not finite, or larger than 1e15, as an issue; null where all are well. */
export function notFinite(values: ArrayLike<number>, what: string): Failed<StatisticsIssue> | null {
  for (let i = 0; i < values.length; i++) {
    if (!(Math.abs(values[i]!) <= mostNumber)) return refused('not-finite', `${what} ${i} is ${values[i]}`);
  }
  return null;
}

/** Fewer than `least` numbers, one that is not finite, or one that is not 1e-12 s after the one before. */
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
    if (!(instantsS[i]! - instantsS[i - 1]! >= leastApartS)) {
      return refused(
        'not-ascending',
        `${what} ${i} at ${instantsS[i]} s is not after the one before, at ${instantsS[i - 1]} s`,
      );
    }
  }
  return null;
}

/**
 * Not a number above zero that a rig can have: rates, times, angles and ratios all lie between 1e-12 and 1e15. Beyond, sums
 * and quotients of them would leave the range of a double.
 */
export function notPositive(value: number, what: string): Failed<StatisticsIssue> | null {
  return value >= 1e-12 && value <= 1e15
    ? null
    : refused('bad-setting', `${what} must be a number above 0, of 1e-12 to 1e15, not ${value}`);
}

/** Not a whole number of at least `least`. */
export function notCount(value: number, least: number, what: string): Failed<StatisticsIssue> | null {
  return Number.isSafeInteger(value) && value >= least
    ? null
    : refused('bad-setting', `${what} must be a whole number of at least ${least}, not ${value}`);
}
