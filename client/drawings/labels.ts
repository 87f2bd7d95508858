/** A label that wants to stand at `y`, px. */
export type Placed<T> = T & { y: number };

/**
 * Moves labels apart so that neighbours keep `gapPx`, within `top` and `bottom`, each as near to its place as that
 * allows. Where they cannot all fit, those listed last are left out: list the most important first.
 */
export function spreadLabels<T extends { y: number }>(
  labels: readonly T[],
  gapPx: number,
  top: number,
  bottom: number,
): T[] {
  const room = Math.max(1, Math.floor((bottom - top) / gapPx) + 1);
  const sorted = labels.slice(0, room).sort((a, b) => a.y - b.y);
  const ys = sorted.map((label) => Math.min(bottom, Math.max(top, label.y)));
  for (let round = 0; round < 2 * ys.length; round++) {
    for (let i = 1; i < ys.length; i++) {
      const lacking = gapPx - (ys[i]! - ys[i - 1]!);
      if (lacking <= 0) continue;
      ys[i - 1] = ys[i - 1]! - lacking / 2;
      ys[i] = ys[i]! + lacking / 2;
    }
  }
  for (let i = 0; i < ys.length; i++)
    ys[i] = Math.max(ys[i]!, top + i * gapPx, i > 0 ? ys[i - 1]! + gapPx : top);
  for (let i = ys.length - 1; i >= 0; i--) ys[i] = Math.min(ys[i]!, bottom - (ys.length - 1 - i) * gapPx);
  return sorted.map((label, i) => ({ ...label, y: ys[i]! }));
}

/** Volts for the left of a lane: two decimals where the swing is small, else as many as tell the levels apart. */
export function voltsText(volts: number, rangeV: number): string {
  const digits = rangeV >= 20 ? 0 : rangeV >= 8 ? 1 : rangeV >= 0.2 ? 2 : 3;
  const text = Math.abs(volts).toFixed(digits);
  return `${volts < 0 && Number(text) !== 0 ? '\u2212' : ''}${text}`;
}
