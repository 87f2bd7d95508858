/** Helpers of the tests beside: taking values out of outcomes, and edges of a shaft whose motion is known. */
import type { Outcome, StatisticsIssueCode } from '@/signal/statistics/issue';

/** The value, or a thrown issue that fails the test. */
export function valueOf<T>(outcome: Outcome<T>): T {
  if (!outcome.ok) throw new Error(`${outcome.issue.code}: ${outcome.issue.detail}`);
  return outcome.value;
}

/** The issue's code, or null where there is a value. */
export function issueOf(outcome: Outcome<unknown>): StatisticsIssueCode | null {
  return outcome.ok ? null : outcome.issue.code;
}

/**
 * Instants, s, at which the shaft has turned by 0, shares[0], shares[0] + shares[1], ... turns, its speed w0 rev/s at
 * the start and changing by `alpha` rev/s^2: the solution of w0 t + alpha t^2 / 2 = angle.
 */
export function passes(
  shares: ArrayLike<number>,
  turns: number,
  w0: number,
  alpha = 0,
  startS = 0,
): Float64Array {
  const n = shares.length;
  const out = new Float64Array(turns * n + 1);
  for (let turn = 0; turn < turns; turn++) {
    let angle = turn;
    for (let k = 0; k < n; k++) {
      out[turn * n + k] = angle;
      angle += shares[k]!;
    }
  }
  out[turns * n] = turns;
  return out.map((angle) => startS + (2 * angle) / (w0 + Math.sqrt(w0 * w0 + 2 * alpha * angle)));
}

/** Largest distance between two columns of one length. */
export function farthest(a: ArrayLike<number>, b: ArrayLike<number>): number {
  if (a.length !== b.length) return Infinity;
  let most = 0;
  for (let i = 0; i < a.length; i++) {
    const off = Math.abs(a[i]! - b[i]!);
    if (!(off <= most)) most = off;
  }
  return most;
}

/** True where every number in it, however deep, is finite. */
export function allFinite(value: unknown): boolean {
  if (typeof value === 'number') return Number.isFinite(value);
  if (ArrayBuffer.isView(value))
    return Array.from(value as unknown as ArrayLike<number>).every(Number.isFinite);
  if (value !== null && typeof value === 'object') return Object.values(value).every(allFinite);
  return true;
}
