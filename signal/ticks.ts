/** Samples between two ticks, the fixed places of a stream at which what was learnt takes effect: 10 a second or more. */
export function samplesPerTick(rateHz: number): number {
  return Math.min(8192, Math.max(1, Math.round(rateHz / 10)));
}
