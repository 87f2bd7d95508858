/**
 * Counts a turn, verified by the index: between two index pulses without a reversal exactly `expected` counts must lie.
 * Fewer are lost edges, more are extra ones; the same other number turn after turn is a wheel set up wrongly.
 * Source: identity of the trade (an index is one pulse a turn).
 */
import { got, notCount, notFinite, refused, type Outcome } from '@/signal/statistics/issue';

export type IndexTurn = 'exact' | 'lost' | 'extra' | 'not-judged';

export type IndexCheck = {
  /** One an interval between index pulses. */
  verdicts: IndexTurn[];
  /** Counts above (or, negative, below) the expected number; 0 where not judged. */
  excess: Int32Array;
  judged: number;
  exact: number;
  lostCounts: number;
  extraCounts: number;
  /** The commonest number of counts a turn, and the share of judged turns that have it; null where none was judged. */
  commonest: { counts: number; share: number } | null;
};

/**
 * @param countsAtIndex signed count at each index pulse, in order of time.
 * @param expected counts a turn: pulses (x1), twice (x2) or four times that (x4).
 * @param reversedBetween for each interval, whether the shaft turned back within it: not judged, since the index is then
 * met from the other side, its own width away. Null: never.
 * Issues: bad-setting, too-few (two index pulses), not-finite.
 */
export function checkIndex(
  countsAtIndex: ArrayLike<number>,
  expected: number,
  reversedBetween: ArrayLike<boolean | number> | null = null,
): Outcome<IndexCheck> {
  const bad = notCount(expected, 1, 'counts a turn') ?? notFinite(countsAtIndex, 'count');
  if (bad) return bad;
  const intervals = countsAtIndex.length - 1;
  if (intervals < 1) return refused('too-few', `${countsAtIndex.length} index pulses, 2 needed`);
  if (reversedBetween && reversedBetween.length !== intervals)
    return refused('bad-setting', `${reversedBetween.length} reversal marks for ${intervals} intervals`);
  const verdicts: IndexTurn[] = [];
  const excess = new Int32Array(intervals);
  const seen = new Map<number, number>();
  const check = { judged: 0, exact: 0, lostCounts: 0, extraCounts: 0 };
  for (let k = 0; k < intervals; k++) {
    if (reversedBetween?.[k]) {
      verdicts.push('not-judged');
      continue;
    }
    const counts = Math.abs(countsAtIndex[k + 1]! - countsAtIndex[k]!);
    const more = counts - expected;
    excess[k] = more;
    seen.set(counts, (seen.get(counts) ?? 0) + 1);
    check.judged++;
    if (more === 0) check.exact++;
    else if (more > 0) check.extraCounts += more;
    else check.lostCounts -= more;
    verdicts.push(more === 0 ? 'exact' : more > 0 ? 'extra' : 'lost');
  }
  let commonest: IndexCheck['commonest'] = null;
  for (const [counts, times] of seen) {
    const share = times / check.judged;
    if (!commonest || share > commonest.share) commonest = { counts, share };
  }
  return got({ verdicts, excess, ...check, commonest });
}
