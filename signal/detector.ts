/**
 * The hysteresis band as a state machine over one channel's volts: where it switches, where the mid level was crossed on
 * the same flank, which peaks did not make it, and what hold-off ate.
 *
 * A state is left through the band: low -> above mid -> above operate (edge), or back below release (a rejected peak).
 * Each zone is its own tight loop. The first sample, and the first arrival beyond a threshold, make no edge.
 */
import { accept, crossMid } from '@/signal/detector-edges';
import { runHold, runUnconfirmed } from '@/signal/detector-hold';
import { scanHigh, scanLow } from '@/signal/detector-scan';
import { zones } from '@/signal/detector-state';
import type { Detector, DetectorSink } from '@/signal/detector-state';

/**
 * Scans `v[from..to]` (ends included); `v[from - 1]` is the sample before, `v[j]` is sample `base + j` of the stream.
 * @returns the first index not scanned: `to + 1`, or less where it paused. Edges are in `d.edges`.
 */
export function runDetector(
  d: Detector,
  v: Float64Array,
  from: number,
  to: number,
  base: number,
  sink: DetectorSink,
): number {
  // Whole numbers are passed on as such only where they are known to be: else the inner loops get boxes.
  const room = d.pauseAt - base - 1;
  const end = room < to ? room | 0 : to;
  const operate = d.operateV;
  const release = d.releaseV;
  const mid = d.midV;
  const recorded = d.edges.count;
  let j = from;
  while (j <= end) {
    if (d.pauseAtEdges && d.edges.count > recorded) break;
    switch (d.zone) {
      case zones.low: {
        j = scanLow(d, v, j, end);
        if (j > end) break;
        crossMid(d, v, j, base);
        d.reachV = v[j]!;
        d.zone = zones.lowUp;
        break;
      }
      case zones.lowUp: {
        let x = 0;
        for (; j <= end; j++) {
          x = v[j]!;
          if (x > operate || x <= mid) break;
          if (x > d.reachV) d.reachV = x;
        }
        if (j > end) break;
        if (x > operate) {
          accept(d, v, j, base, true);
          j++;
        } else {
          d.zone = zones.lowBack;
          d.backV = x;
        }
        break;
      }
      case zones.lowBack: {
        let x = 0;
        for (; j <= end; j++) {
          x = v[j]!;
          if (x < d.backV) d.backV = x;
          if (x > mid || x < release) break;
        }
        if (j > end) break;
        sink.wobble(d.reachV - d.backV);
        if (x > mid) {
          crossMid(d, v, j, base);
          d.reachV = Math.max(d.reachV, x);
          d.zone = zones.lowUp;
        } else {
          d.rejectedAt = base + j;
          sink.rejected(d.midAt, d.reachV, true);
          d.zone = zones.low;
        }
        break;
      }
      case zones.high: {
        j = scanHigh(d, v, j, end);
        if (j > end) break;
        crossMid(d, v, j, base);
        d.reachV = v[j]!;
        d.zone = zones.highDown;
        break;
      }
      case zones.highDown: {
        let x = 0;
        for (; j <= end; j++) {
          x = v[j]!;
          if (x < release || x >= mid) break;
          if (x < d.reachV) d.reachV = x;
        }
        if (j > end) break;
        if (x < release) {
          accept(d, v, j, base, false);
          j++;
        } else {
          d.zone = zones.highBack;
          d.backV = x;
        }
        break;
      }
      case zones.highBack: {
        let x = 0;
        for (; j <= end; j++) {
          x = v[j]!;
          if (x > d.backV) d.backV = x;
          if (x < mid || x > operate) break;
        }
        if (j > end) break;
        sink.wobble(d.backV - d.reachV);
        if (x < mid) {
          crossMid(d, v, j, base);
          d.reachV = Math.min(d.reachV, x);
          d.zone = zones.highDown;
        } else {
          d.rejectedAt = base + j;
          sink.rejected(d.midAt, d.reachV, false);
          d.zone = zones.high;
        }
        break;
      }
      case zones.sinking:
      case zones.climbing: {
        j = runUnconfirmed(d, v, j, end, base);
        break;
      }
      case zones.hold: {
        j = runHold(d, v, j, end, base, sink);
        break;
      }
      default: {
        for (; j <= end; j++) {
          const x = v[j]!;
          if (x > operate || x < release) {
            d.zone = x > operate ? zones.high : zones.low;
            d.midAt = NaN;
            d.midStepV = NaN;
            d.extremeV = x;
            j++;
            break;
          }
        }
      }
    }
  }
  return j;
}
