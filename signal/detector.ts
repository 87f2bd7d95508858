/**
 * The hysteresis band as a state machine over one channel's volts: where it switches, where the mid level was crossed on
 * the same flank, which peaks did not make it, and what hold-off ate.
 *
 * A state is left through the band: low -> above mid -> above operate (edge), or back below release (a rejected peak).
 * Each zone is its own tight loop, the two where most samples are spent functions of their own: kept in one, the loops crowd
 * each other out of the registers and take twice as long. The first sample, and the first arrival beyond a threshold, make no edge.
 * Instants are linear interpolations between neighbouring samples, as (whole sample) + (fraction), so that they do not
 * depend on where a block began.
 */
import { edgeLate, edgeRising } from '@/signal/pipeline-types';

export const zones = {
  unknown: 0,
  low: 1,
  lowUp: 2,
  lowBack: 3,
  high: 4,
  highDown: 5,
  highBack: 6,
  hold: 7,
} as const;

export type Detector = {
  zone: number;
  operateV: number;
  releaseV: number;
  midV: number;
  /** The trough so far (low) or the peak so far (high), V. */
  extremeV: number;
  /** How far an excursion through mid has come, V. */
  reachV: number;
  /** How far it then came back, V. */
  backV: number;
  /** Last mid crossing on the flank that leaves the present state, samples; NaN where none was seen. */
  midAt: number;
  /** Size of the step across that crossing, V a sample. */
  midStepV: number;
  holdSamples: number;
  holdEndAt: number;
  /** State during hold-off, and where a band without hold-off would be. */
  high: boolean;
  wouldBeHigh: boolean;
  /** Stream index at which the scan pauses (nothing came for long); Infinity: never. */
  pauseAt: number;
  /** The scan returns after each edge, because new thresholds follow from it. */
  pauseAtEdges: boolean;
  /** Where edges are put; whoever runs the detector empties it. */
  edges: RawEdges;
};

/** Edges as columns, in order; the first `count` are valid. Instants in samples on the stream's axis. */
export type RawEdges = {
  count: number;
  at: Float64Array;
  midAt: Float64Array;
  midStepV: Float64Array;
  extremeV: Float64Array;
  /** As in `EdgeColumns`. */
  flags: Uint8Array;
};

export type DetectorSink = {
  /** @param reachV how far it came, V; NaN for a crossing that hold-off ate. @param rising true: towards operate. */
  rejected(at: number, reachV: number, rising: boolean): void;
  /** On a flank, or short of an edge, the signal came back through mid by `backV`. */
  wobble(backV: number): void;
};

export function createDetector(holdSamples: number, pauseAtEdges: boolean): Detector {
  return {
    zone: zones.unknown,
    operateV: NaN,
    releaseV: NaN,
    midV: NaN,
    extremeV: NaN,
    reachV: NaN,
    backV: NaN,
    midAt: NaN,
    midStepV: NaN,
    holdSamples,
    holdEndAt: NaN,
    high: false,
    wouldBeHigh: false,
    pauseAt: Infinity,
    pauseAtEdges,
    edges: createRawEdges(64),
  };
}

function createRawEdges(length: number): RawEdges {
  return {
    count: 0,
    at: new Float64Array(length),
    midAt: new Float64Array(length),
    midStepV: new Float64Array(length),
    extremeV: new Float64Array(length),
    flags: new Uint8Array(length),
  };
}

export function setThresholds(detector: Detector, operateV: number, releaseV: number): void {
  detector.operateV = operateV;
  detector.releaseV = releaseV;
  detector.midV = (operateV + releaseV) / 2;
}

/** The band's state is unknown again: after a gap, or when levels were found anew. */
export function forgetState(detector: Detector): void {
  detector.zone = zones.unknown;
  detector.midAt = NaN;
  detector.midStepV = NaN;
}

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
  const end = Math.min(to, d.pauseAt - base - 1);
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
          sink.rejected(d.midAt, d.reachV, false);
          d.zone = zones.high;
        }
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

/** First index at which `v` is above `mid`, following the trough on the way. */
function scanLow(d: Detector, v: Float64Array, from: number, end: number): number {
  const mid = d.midV;
  let lowest = d.extremeV;
  let j = from;
  for (; j <= end; j++) {
    const x = v[j]!;
    if (x > mid) break;
    if (x < lowest) lowest = x;
  }
  d.extremeV = lowest;
  return j;
}

/** First index at which `v` is below `mid`, following the peak on the way. */
function scanHigh(d: Detector, v: Float64Array, from: number, end: number): number {
  const mid = d.midV;
  let highest = d.extremeV;
  let j = from;
  for (; j <= end; j++) {
    const x = v[j]!;
    if (x < mid) break;
    if (x > highest) highest = x;
  }
  d.extremeV = highest;
  return j;
}

/** Between `v[j - 1]` and `v[j]`, as an instant of the stream in samples. */
function crossing(v: Float64Array, j: number, base: number, level: number): number {
  const before = v[j - 1]!;
  const step = v[j]! - before;
  const share = step === 0 ? 1 : Math.min(1, Math.max(0, (level - before) / step));
  return base + (j - 1) + share;
}

// Numbers passed to a function that is not inlined are boxed: what an edge needs is read from the detector instead.
function crossMid(d: Detector, v: Float64Array, j: number, base: number): void {
  const before = v[j - 1]!;
  const step = v[j]! - before;
  const share = step === 0 ? 1 : Math.min(1, Math.max(0, (d.midV - before) / step));
  d.midAt = base + (j - 1) + share;
  d.midStepV = Math.abs(step);
}

/** An edge between `v[j - 1]` and `v[j]`; the state's extreme goes with it. */
function accept(d: Detector, v: Float64Array, j: number, base: number, rising: boolean): void {
  const before = v[j - 1]!;
  const x = v[j]!;
  const step = x - before;
  const level = rising ? d.operateV : d.releaseV;
  const share = step === 0 ? 1 : Math.min(1, Math.max(0, (level - before) / step));
  record(d, rising ? edgeRising : 0);
  d.edges.at[d.edges.count - 1] = base + (j - 1) + share;
  settle(d, rising);
  d.extremeV = x;
}

/** Opens a record; its instant is for the caller to write. */
function record(d: Detector, flags: number): void {
  if (d.edges.count === d.edges.at.length) {
    const old = d.edges;
    const wider = createRawEdges(2 * old.at.length);
    wider.at.set(old.at);
    wider.midAt.set(old.midAt);
    wider.midStepV.set(old.midStepV);
    wider.extremeV.set(old.extremeV);
    wider.flags.set(old.flags);
    wider.count = old.count;
    d.edges = wider;
  }
  const { edges } = d;
  const k = edges.count++;
  edges.midAt[k] = d.midAt;
  edges.midStepV[k] = d.midStepV;
  edges.extremeV[k] = d.extremeV;
  edges.flags[k] = flags;
}

/** The instant is written: the state changes, and a hold-off begins with it. */
function settle(d: Detector, rising: boolean): void {
  const { edges } = d;
  const k = edges.count - 1;
  if (!(edges.midAt[k]! <= edges.at[k]!)) edges.midAt[k] = edges.at[k]!;
  d.midAt = NaN;
  d.midStepV = NaN;
  d.zone = rising ? zones.high : zones.low;
  if (d.holdSamples === 0) return;
  d.zone = zones.hold;
  d.holdEndAt = edges.at[k]! + d.holdSamples;
  d.high = rising;
  d.wouldBeHigh = rising;
}

/** Until the hold-off ends; returns the first index not scanned. Once it has ended without an edge the sample is scanned again. */
function runHold(
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
        record(d, (rising ? edgeRising : 0) | (late ? edgeLate : 0));
        d.edges.at[d.edges.count - 1] = late ? d.holdEndAt : at;
        settle(d, rising);
        d.extremeV = x;
        return j + 1;
      }
      if (d.high) d.zone = x < d.midV ? zones.highDown : zones.high;
      else d.zone = x > d.midV ? zones.lowUp : zones.low;
      d.reachV = x;
      return j;
    }
    if (crosses) {
      d.wouldBeHigh = !d.wouldBeHigh;
      sink.rejected(at, NaN, d.wouldBeHigh);
    }
    if (d.high ? x > d.extremeV : x < d.extremeV) d.extremeV = x;
  }
  return end + 1;
}
