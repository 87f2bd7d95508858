/**
 * An interval in sync that is neither one position nor the gap as it is due: which reading of it fits best. It may span one
 * position or several (teeth that did not show, the gap, both), or end at a pulse that is no tooth, or begin at one.
 *
 * The misfit of a reading is in ln of time: against the mean pitch of both neighbours, and, weighing half, against the
 * pitch that the trend before it leads to; each fault that it presumes costs something on top. A brake makes each pitch longer
 * by a larger ratio than the one before, up to a stop or to the speed that it leaves: where the pitches before tell of one,
 * it explains whatever an even deceleration would make, and any pitch between its neighbours.
 */
import type { GapSync } from '@/signal/gap-sync';

const trendWeight = 0.5;
/** A shaft does not change its speed by more from one position to the next, in ln. */
const steepestTrend = 0.3;
/** A brake begins with so much more time for a position; it may grip by so many times more than it did, teeth being off. */
const leastBraked = 1.1;
const harder = 1.75;
const missedCost = 0.05;
const extraCost = 0.18;
const mostMissed = 2;
/** Where nothing fits better than this, the interval cannot be counted. */
const worstFit = 0.5;

/**
 * Reads the interval `waitingS`, followed by `sync.intervalS`, and notes in `lateAs` and `uncountable` what `moveOn` is to
 * make of it.
 * @returns positions that it spans; 0 where the tooth that closes it is to be left out: `sync.intervalS` is then the interval
 * to be judged without it.
 */
export function bestReading(sync: GapSync, waitingS: number): number {
  const { missing, position, positions, intervalS: nextS, perPositionS: beforeS, olderS, lastSpans } = sync;
  const whole = missing + 1;
  const last = positions - missing - 1;
  const due = position === last;
  const lnBefore = Math.log(beforeS);
  const lnNext = Math.log(nextS);
  const lnWaiting = Math.log(waitingS);
  const perPosition = ((lnBefore - Math.log(olderS)) * 2) / (lastSpans + 1) || 0;
  const trend = Math.min(steepestTrend, Math.max(-steepestTrend, perPosition));

  /** Of `spans` positions where the next interval spans `nextSpans`. */
  const misfit = (spans: number, nextSpans: number): number => {
    const lnPitch = lnWaiting - Math.log(spans);
    const lnAfter = lnNext - Math.log(nextSpans);
    const braked = lnBraked(sync, spans);
    const off = Math.abs(lnPitch - (lnBefore + lnAfter) / 2);
    const level = braked > 0 ? Math.max(0, off - Math.abs(lnAfter - lnBefore) / 2) : off;
    return level + trendWeight * offTrend(lnPitch - lnBefore, Math.max(braked, (trend * (spans + 1)) / 2));
  };

  let best = 1;
  let least = misfit(1, position + 1 === last ? whole : 1);
  sync.lateAs = 'late-gap';
  if (due) {
    const late = misfit(1, whole);
    if (late < least) sync.lateAs = 'extra-tooth';
    least = Math.min(least, late);
  }
  for (let spans = 2; spans <= whole + mostMissed; spans++) {
    const missed = position + spans >= positions ? spans - whole : spans - 1;
    // So many positions as the gap has, before its time, may be the gap.
    if (missed > mostMissed && spans !== whole) continue;
    const cost =
      misfit(spans, position + spans === last ? whole : 1) + missedCost * Math.min(missed, mostMissed);
    if (cost >= least) continue;
    least = cost;
    best = spans;
  }
  // Right after an extra pulse there is no other: the shaft turns twice as fast then.
  if (sync.sinceExtra !== 1) {
    const ends = extraAtEnd(waitingS + nextS, beforeS * (due ? whole : 1), trend);
    const begins = extraAtBegin(sync, waitingS);
    if (Math.min(ends, begins) < least) {
      least = Math.min(ends, begins);
      best = 0;
      sync.intervalS = waitingS + nextS;
      if (begins < ends) {
        sync.perPositionS = olderS;
        sync.intervalS = nextS;
      }
    }
  }
  sync.uncountable = least <= worstFit ? null : waitingS > beforeS ? 'timeout' : 'extra-tooth';
  return sync.uncountable ? 1 : best;
}

/**
 * By how much, in ln, an even deceleration as before would make the mean of the next `spans` pitches longer than the last one;
 * Infinity where the shaft would stand before they are over; 0: it was not braked.
 *
 * With v the speed at the end of the last pitch and a the deceleration, n positions take (v - sqrt(v^2 - 2 a n)) / a.
 */
function lnBraked({ perPositionS: beforeS, olderS, lastSpans }: GapSync, spans: number): number {
  if (!(beforeS > leastBraked * olderS)) return 0;
  const lastS = beforeS * lastSpans;
  const lost = (2 * harder * (1 / olderS - 1 / beforeS)) / (olderS + lastS);
  const speed = 1 / beforeS - (lost * lastS) / 2;
  const square = speed * speed - 2 * lost * spans;
  if (speed < 0 || square < 0) return Infinity;
  return Math.log((speed - Math.sqrt(square)) / (lost * spans * beforeS));
}

/** How far a change of pitch, in ln, lies outside of what a steady shaft and one that goes on as before would make. */
function offTrend(change: number, led: number): number {
  return Math.max(0, change - Math.max(0, led), Math.min(0, led) - change);
}

/** The tooth between the two intervals is none. Both within half a pitch are so whatever else fits: a contact that bounces. */
function extraAtEnd(bothS: number, expectedS: number, trend: number): number {
  const share = bothS / expectedS;
  return share < 0.5 ? 0 : (1 + trendWeight) * offTrend(Math.log(share), trend) + extraCost;
}

/** The tooth before was none, and was taken for one since it stood near; the one after it can go in its stead. */
function extraAtBegin({ perPositionS, lastSpans, olderS, intervalS }: GapSync, waitingS: number): number {
  const share = (perPositionS * lastSpans + waitingS) / (olderS * lastSpans);
  const cost = Math.abs(Math.log(share)) + trendWeight * Math.abs(Math.log(intervalS / olderS)) + extraCost;
  return Number.isNaN(cost) ? Infinity : cost;
}
