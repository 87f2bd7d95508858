/** Samples between two ticks, the fixed places of a stream at which what was learnt takes effect: 10 a second or more. */
export function samplesPerTick(rateHz: number): number {
  return Math.min(8192, Math.max(1, Math.round(rateHz / 10)));
}

/** Far beyond any stream, and small enough that several of them leave every sample's number exact. */
const longestGap = 2 ** 50;

/** Lost samples in whole numbers; 0 where that is none: less than half a sample, no number, or beyond all reason. */
export function wholeGap(lostSamples: number): number {
  const lost = Math.round(lostSamples);
  return lost >= 1 && lost <= longestGap ? lost : 0;
}
