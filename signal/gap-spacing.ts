/** What gaps look like and how far they lie apart, in sync or not: tells a wheel that is set up wrongly. */
import type { GapSync } from '@/signal/gap-sync';

const share = 1 / 8;

/** An interval of `spans` positions has passed. */
export function noteSpacing(sync: GapSync, spans: number): void {
  if (sync.sinceGap >= 0) sync.sinceGap += spans;
  // In sync a tooth that did not show is no gap.
  if (spans === 1 || (sync.state === 'synced' && sync.position + spans < sync.positions)) return;
  if (sync.sinceGap > 0) {
    sync.sameBetween = sync.sinceGap === sync.betweenGaps ? sync.sameBetween + 1 : 1;
    sync.betweenGaps = sync.sinceGap;
  }
  sync.sinceGap = 0;
}

/** A gap of `gapS` between pitches of `beforeS` and `afterS`. */
export function noteGapRatio(sync: GapSync, gapS: number, beforeS: number, afterS: number): void {
  const ratio = gapS / Math.sqrt(beforeS * afterS);
  sync.gapRatio = Number.isNaN(sync.gapRatio) ? ratio : sync.gapRatio + (ratio - sync.gapRatio) * share;
  sync.gapS = NaN;
}
