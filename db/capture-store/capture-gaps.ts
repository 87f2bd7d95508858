export type CaptureGap = { fromIndex: number; lostSamples: number; estimated: boolean };

/**
 * The gaps of a capture on its own axis: every stretch without samples is one, `estimated` as known from the stream's
 * gaps. Losses of no sample (`lostSamples` 0) within the capture stay.
 */
export function gapsOfCapture(
  holes: readonly { from: number; to: number }[],
  known: readonly CaptureGap[],
  lengthSamples: number,
): CaptureGap[] {
  const sorted = [...known].sort((a, b) => a.fromIndex - b.fromIndex);
  const gaps = new Map<number, CaptureGap>();
  const add = (from: number, to: number, estimated: boolean) => {
    if (to > from) gaps.set(from, { fromIndex: from, lostSamples: to - from, estimated });
  };
  for (const hole of holes) {
    let at = hole.from;
    for (const gap of sorted) {
      const from = Math.max(at, gap.fromIndex);
      const to = Math.min(hole.to, gap.fromIndex + gap.lostSamples);
      if (to <= from) continue;
      add(at, from, false);
      add(from, to, gap.estimated);
      at = to;
    }
    add(at, hole.to, false);
  }
  for (const gap of sorted) {
    const inside = gap.fromIndex > 0 && gap.fromIndex < lengthSamples;
    const inHole = holes.some((h) => gap.fromIndex >= h.from && gap.fromIndex <= h.to);
    if (gap.lostSamples === 0 && inside && !inHole) gaps.set(gap.fromIndex, gap);
  }
  return [...gaps.values()].sort((a, b) => a.fromIndex - b.fromIndex);
}
