/**
 * Instants at which a band's levels are crossed, by a straight line between neighbouring samples, and the record of an edge.
 * An instant is (whole sample) + (fraction), so that it does not depend on where a block began.
 */
import { createRawEdges, zones } from '@/signal/detector-state';
import type { Detector } from '@/signal/detector-state';
import { edgeRising } from '@/signal/pipeline-types';

/** Between `v[j - 1]` and `v[j]`, as an instant of the stream in samples. */
export function crossing(v: Float64Array, j: number, base: number, level: number): number {
  const before = v[j - 1]!;
  const step = v[j]! - before;
  const share = step === 0 ? 1 : Math.min(1, Math.max(0, (level - before) / step));
  return base + (j - 1) + share;
}

// Numbers passed to a function that is not inlined are boxed: what an edge needs is read from the detector instead.
export function crossMid(d: Detector, v: Float64Array, j: number, base: number): void {
  const before = v[j - 1]!;
  const step = v[j]! - before;
  const share = step === 0 ? 1 : Math.min(1, Math.max(0, (d.midV - before) / step));
  d.midAt = base + (j - 1) + share;
  d.midStepV = Math.abs(step);
}

/** An edge between `v[j - 1]` and `v[j]`; the state's extreme goes with it. */
export function accept(d: Detector, v: Float64Array, j: number, base: number, rising: boolean): void {
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
export function record(d: Detector, flags: number): void {
  if (d.edges.count === d.edges.at.length) widen(d);
  const { edges } = d;
  const k = edges.count++;
  edges.midAt[k] = d.midAt;
  edges.midStepV[k] = d.midStepV;
  edges.extremeV[k] = d.extremeV;
  edges.flags[k] = flags;
}

function widen(d: Detector): void {
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

/** The instant is written: the state changes, and a hold-off begins with it. */
export function settle(d: Detector, rising: boolean): void {
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
