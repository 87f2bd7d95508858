/** Where the waits between attempts start and end, ms. */
export const backoffLimits = { firstMs: 500, longestMs: 15_000 } as const;

/**
 * Wait before attempt `attempt` (0: the first after a loss), ms. Doubles up to the longest; `random` (0 to 1)
 * spreads it over the upper half, so that the viewers of a restarted hub do not all come back in one moment.
 */
export function backoffMs(attempt: number, random: number): number {
  const full = Math.min(backoffLimits.longestMs, backoffLimits.firstMs * 2 ** Math.min(attempt, 20));
  return full / 2 + (full / 2) * random;
}
