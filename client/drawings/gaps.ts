export type Stretch = { from: number; to: number };

/** What is left of a window when gaps are cut out of it, in order. */
export function withoutGaps(window: Stretch, gaps: readonly Stretch[]): Stretch[] {
  const left: Stretch[] = [];
  let from = window.from;
  for (const gap of [...gaps].sort((a, b) => a.from - b.from)) {
    if (gap.to <= from || gap.from >= window.to) continue;
    if (gap.from > from) left.push({ from, to: gap.from });
    from = Math.max(from, gap.to);
  }
  if (from < window.to) left.push({ from, to: window.to });
  return left;
}

/** A torn edge: a zig-zag down from `top` to `bottom` at `x`, px. */
export function tornEdge(x: number, top: number, bottom: number, tooth = 3, pitch = 6): string {
  const steps = Math.max(1, Math.round((bottom - top) / pitch));
  const dy = (bottom - top) / steps;
  let d = `M${x.toFixed(1)} ${top.toFixed(1)}`;
  for (let i = 1; i <= steps; i++) {
    const dx = i === steps ? 0 : i % 2 === 0 ? -tooth : tooth;
    d += `L${(x + dx).toFixed(1)} ${(top + i * dy).toFixed(1)}`;
  }
  return d;
}
