import type { TimeScale } from '@/client/drawings/time-axis';

/** Columns of one lane: entry i stands at `firstS + i * stepS`; null where there is no sample. */
export type Columns = {
  firstS: number;
  stepS: number;
  min: readonly (number | null)[];
  max: readonly (number | null)[];
};

export type TracePaths = { trace: string; clipped: string };

/**
 * The trace as one path: through the samples where a column holds one, along each column's extremes where it holds
 * more; broken where samples are missing. Columns that reach a clip level are given once more in `clipped`.
 * `breaks` are instants that no line may cross (gaps narrower than a column).
 */
export function tracePaths(
  columns: Columns,
  time: TimeScale,
  y: (volts: number) => number,
  clip: { lowV: number | null; highV: number | null },
  breaks: readonly number[] = [],
): TracePaths {
  const { firstS, stepS, min, max } = columns;
  const begin = Math.max(0, Math.floor((time.fromS - firstS) / stepS));
  const end = Math.min(min.length - 1, Math.ceil((time.toS - firstS) / stepS));
  const high = clip.highV ?? Infinity;
  const low = clip.lowV ?? -Infinity;
  let trace = '';
  let clipped = '';
  let pen = false;
  let clippedPen = false;
  let lastY = 0;
  let nextBreak = 0;
  for (let i = begin; i <= end; i++) {
    const a = min[i];
    const b = max[i];
    const s = firstS + i * stepS;
    while (nextBreak < breaks.length && breaks[nextBreak]! <= s) {
      if (breaks[nextBreak]! > s - stepS) pen = false;
      nextBreak += 1;
    }
    if (a == null || b == null) {
      pen = false;
      clippedPen = false;
      continue;
    }
    const x = time.x(s).toFixed(1);
    const yMin = y(a);
    const yMax = y(b);
    // The end nearer to where the pen stands first, so that the line does not saw.
    const [y1, y2] = Math.abs(yMax - lastY) < Math.abs(yMin - lastY) ? [yMax, yMin] : [yMin, yMax];
    const point = a === b ? `${x} ${y1.toFixed(1)}` : `${x} ${y1.toFixed(1)}L${x} ${y2.toFixed(1)}`;
    trace += `${pen ? 'L' : 'M'}${point}${pen || a !== b ? '' : 'h.01'}`;
    const reaches = b >= high || a <= low;
    // Only the level that is cut off, not the flank that leads to it.
    if (reaches)
      clipped += `${clippedPen ? 'L' : 'M'}${x} ${(b >= high ? yMax : yMin).toFixed(1)}${clippedPen ? '' : 'h.01'}`;
    pen = true;
    clippedPen = reaches && !(b >= high && a <= low);
    lastY = y2;
  }
  return { trace, clipped };
}

/**
 * Where a column spans little of the lane's range, its middle alone: a few samples a column on a smooth signal else
 * draw stairs. Columns at a clip level, steep flanks and noise keep their extremes.
 */
export function calmColumns(
  columns: Columns,
  range: Range,
  clip: { lowV: number | null; highV: number | null },
): Columns {
  const most = (range.highV - range.lowV) * calmShare;
  const min = [...columns.min];
  const max = [...columns.max];
  for (let i = 0; i < min.length; i++) {
    const a = min[i];
    const b = max[i];
    if (a == null || b == null || b - a > most) continue;
    if (b >= (clip.highV ?? Infinity) || a <= (clip.lowV ?? -Infinity)) continue;
    min[i] = max[i] = (a + b) / 2;
  }
  return { ...columns, min, max };
}

const calmShare = 0.12;

export type Range = { lowV: number; highV: number };

/** What a lane must show: the swing, the band and every sample, with 8 % of air; never flatter than 20 mV. */
export function wantedRange(columns: Columns, levels: readonly (number | null)[]): Range {
  let lowV = Infinity;
  let highV = -Infinity;
  for (const level of levels) {
    if (level == null) continue;
    lowV = Math.min(lowV, level);
    highV = Math.max(highV, level);
  }
  for (let i = 0; i < columns.min.length; i++) {
    const a = columns.min[i];
    const b = columns.max[i];
    if (a != null && a < lowV) lowV = a;
    if (b != null && b > highV) highV = b;
  }
  if (lowV > highV) return { lowV: 0, highV: 1 };
  const middle = (lowV + highV) / 2;
  const half = Math.max((highV - lowV) / 2, 0.01) * 1.08;
  return { lowV: middle - half, highV: middle + half };
}

/** Grows at once, shrinks only when far too big: volts at the left must not dance with the noise. */
export function steadyRange(before: Range | null, wanted: Range): Range {
  if (!before) return wanted;
  const span = before.highV - before.lowV;
  const fits = wanted.lowV >= before.lowV - 0.01 * span && wanted.highV <= before.highV + 0.01 * span;
  const tooBig = wanted.highV - wanted.lowV < 0.7 * span;
  return fits && !tooBig ? before : wanted;
}
