/**
 * The band where its state is not what the signal says: during hold-off, where what it would have done is noted and its true
 * state is taken up at the end; and after the band itself has moved.
 */
import { crossing, crossMid, record, settle } from '@/signal/detector-edges';
import { zones } from '@/signal/detector-state';
import type { Detector, DetectorSink } from '@/signal/detector-state';
import { edgeLate, edgeRising } from '@/signal/pipeline-types';

/** Until the hold-off ends; returns the first index not scanned. Once it has ended without an edge the sample is scanned again. */
export function runHold(
  d: Detector,
  v: Float64Array,
  from: number,
  end: number,
  base: number,
  sink: DetectorSink,
): number {
  for (let j = from; j <= end; j++) {
    const x = v[j]!;
    const before = v[j - 1]!;
    if (d.high ? before >= d.midV && x < d.midV : before <= d.midV && x > d.midV) crossMid(d, v, j, base);
    const crosses = d.wouldBeHigh ? x < d.releaseV : x > d.operateV;
    const at = crosses ? crossing(v, j, base, d.wouldBeHigh ? d.releaseV : d.operateV) : NaN;
    if (base + j >= d.holdEndAt) {
      const beyond = d.high ? x < d.releaseV : x > d.operateV;
      if (beyond) {
        const late = !(crosses && at >= d.holdEndAt);
        const rising = !d.high;
        if (late && !crosses) d.eatenCount--;
        record(d, (rising ? edgeRising : 0) | (late ? edgeLate : 0));
        d.edges.at[d.edges.count - 1] = late ? d.holdEndAt : at;
        settle(d, rising);
        d.extremeV = x;
        return j + 1;
      }
      if (crosses) d.eatenCount++;
      // On its way back from the other side: where it comes back to, no edge tells of it either.
      if ((d.wouldBeHigh !== crosses) !== d.high) d.eatenCount++;
      if (d.high) d.zone = x < d.midV ? zones.highDown : zones.high;
      else d.zone = x > d.midV ? zones.lowUp : zones.low;
      d.reachV = x;
      return j;
    }
    if (crosses) {
      d.wouldBeHigh = !d.wouldBeHigh;
      d.rejectedAt = base + j;
      d.eatenCount++;
      sink.rejected(at, NaN, d.wouldBeHigh);
    }
    if (d.high ? x > d.extremeV : x < d.extremeV) d.extremeV = x;
  }
  return end + 1;
}

/** A state that the band's move contradicts, until it is confirmed or ends; returns the first index not scanned. */
export function runUnconfirmed(
  d: Detector,
  v: Float64Array,
  from: number,
  end: number,
  base: number,
): number {
  const low = d.zone === zones.sinking;
  for (let j = from; j <= end; j++) {
    const x = v[j]!;
    const before = v[j - 1]!;
    if (low ? x < d.releaseV : x > d.operateV) {
      d.extremeV = x;
      if (base + j < d.holdEndAt) d.zone = zones.hold;
      else d.zone = low ? zones.low : zones.high;
      return j;
    }
    if (low ? before <= d.midV && x > d.midV : before >= d.midV && x < d.midV) crossMid(d, v, j, base);
    if ((low ? x > d.keptUpToV : x < d.keptUpToV) && !(base + j < d.holdEndAt)) {
      record(d, low ? edgeRising : 0);
      d.edges.at[d.edges.count - 1] = crossing(v, j, base, d.keptUpToV);
      settle(d, low);
      d.extremeV = x;
      return j + 1;
    }
    if (low ? x < d.extremeV : x > d.extremeV) d.extremeV = x;
  }
  return end + 1;
}
