/**
 * How many positions of a missing-tooth wheel an interval between two teeth spans.
 *
 * Most intervals tell it by themselves: near the time for one position before them, or, where the gap is due, near M + 1
 * times that. Any other waits for the next one, so that it can be held against both neighbours: their geometric mean
 * follows a shaft that speeds up or slows down by a constant ratio, where one neighbour alone would mislead by half a
 * position at 0.25 to 0.5 of alpha d / w^2. In sync the places decide as well (`gap-readings.ts`).
 */
import { gapIsDue, noteReading } from '@/signal/gap-proof';
import { bestReading } from '@/signal/gap-readings';
import { noteGapRatio } from '@/signal/gap-spacing';
import type { GapSync } from '@/signal/gap-sync';

/** Half way, in ratio, between one position and two. */
const halfWay = Math.SQRT2;
/** Outside sync anything that could be a gap on a shaft that speeds up is held against both neighbours; in sync, anything short. */
const quarterWay = 2 ** 0.25;
/** A due gap is believed at once within this ratio of M + 1. */
const nearGap = 1.16;

/**
 * Judges the interval that a tooth closes, `sync.intervalS`.
 * @returns positions that it spans, or 0 where that must wait for the next tooth.
 */
export function judgeInterval(sync: GapSync): number {
  const { intervalS, perPositionS: beforeS, missing } = sync;
  sync.pulses++;
  if (missing === 0 || Number.isNaN(beforeS)) {
    sync.perPositionS = intervalS;
    return 1;
  }
  const ratio = intervalS / beforeS;
  if (gapIsDue(sync)) {
    const whole = missing + 1;
    if (ratio > whole / nearGap && ratio < whole * nearGap) {
      sync.gapS = intervalS;
      sync.beforeGapS = beforeS;
      return accept(sync, whole);
    }
  } else if (sync.state === 'synced' ? ratio < halfWay && ratio > 1 / quarterWay : ratio < quarterWay) {
    if (sync.gapS > 0) noteGapRatio(sync, sync.gapS, sync.beforeGapS, intervalS);
    return accept(sync, 1);
  }
  sync.gapS = NaN;
  sync.waitingS = intervalS;
  return 0;
}

/**
 * Judges the interval that waited, now that the next one, `sync.intervalS`, is known.
 * @returns positions that it spans; 0 where the tooth between the two was none: `sync.intervalS` is then the interval to be judged without it.
 */
export function judgeWaiting(sync: GapSync): number {
  const { waitingS, intervalS: nextS, perPositionS: beforeS } = sync;
  sync.waitingS = NaN;
  const spans = sync.state === 'synced' ? bestReading(sync, waitingS) : plainReading(sync, waitingS);
  noteReading(sync, waitingS, spans);
  if (spans === 0) {
    sync.extraPulses++;
    sync.sinceExtra = 0;
    return 0;
  }
  if (spans > 1 && (sync.state !== 'synced' || gapIsDue(sync))) noteGapRatio(sync, waitingS, beforeS, nextS);
  sync.intervalS = waitingS;
  accept(sync, spans);
  sync.intervalS = nextS;
  return spans;
}

/** The interval at hand spans so many positions. */
function accept(sync: GapSync, spans: number): number {
  sync.olderS = sync.perPositionS;
  sync.perPositionS = sync.intervalS / spans;
  sync.lastSpans = spans;
  sync.sinceExtra++;
  return spans;
}

/** By the neighbours alone. So long a silence as no gap makes is a shaft that paused. */
function plainReading({ missing, perPositionS, intervalS }: GapSync, waitingS: number): number {
  const ratio = waitingS / Math.sqrt(perPositionS * intervalS);
  return ratio > halfWay && ratio < missing + 3.5 ? Math.round(ratio) : 1;
}
