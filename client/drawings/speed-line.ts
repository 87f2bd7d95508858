import { spreadLabels } from '@/client/drawings/labels';

export type SpeedPoint = { t: number; rpm: number | null };
export type SpeedRange = { low: number; high: number };

/** Lowest and highest known speed; null where none is known. */
export function speedExtremes(points: readonly SpeedPoint[]): SpeedRange | null {
  let low = Infinity;
  let high = -Infinity;
  for (const { rpm } of points) {
    if (rpm === null) continue;
    if (rpm < low) low = rpm;
    if (rpm > high) high = rpm;
  }
  return low > high ? null : { low, high };
}

/** Air above and below; never so narrow that ripple of 1 % looks like a fault. */
export function sparkRange({ low, high }: SpeedRange): SpeedRange {
  const least = Math.max(0.02 * Math.max(Math.abs(low), Math.abs(high)), 0.5);
  const half = Math.max((high - low) / 2, least / 2) * 1.1;
  const middle = (low + high) / 2;
  return { low: middle - half, high: middle + half };
}

/** With the zero line in it: capture speed is read against standstill. */
export function zeroRange({ low, high }: SpeedRange): SpeedRange {
  const bottom = Math.min(0, low);
  const top = Math.max(0, high);
  const air = Math.max((top - bottom) * 0.1, 0.5);
  return { low: bottom - air, high: top + air };
}

/**
 * Speed as a path. Points that fall into one column of `columnPx` are drawn by their extremes; the line breaks at
 * unknown stretches and at `breaks` (instants of gaps), sorted.
 */
export function speedPath(
  points: readonly SpeedPoint[],
  x: (t: number) => number,
  y: (rpm: number) => number,
  breaks: readonly number[] = [],
  columnPx = 1,
): string {
  let d = '';
  let pen = false;
  let at = 0;
  let i = 0;
  while (i < points.length) {
    const { t, rpm } = points[i]!;
    while (at < breaks.length && breaks[at]! <= t) {
      pen = false;
      at += 1;
    }
    if (rpm === null) {
      pen = false;
      i += 1;
      continue;
    }
    const column = Math.floor(x(t) / columnPx);
    const stop = breaks[at] ?? Infinity;
    let low = i;
    let high = i;
    let j = i + 1;
    for (; j < points.length; j++) {
      const next = points[j]!;
      if (next.rpm === null || next.t >= stop || Math.floor(x(next.t) / columnPx) !== column) break;
      if (next.rpm < points[low]!.rpm!) low = j;
      if (next.rpm > points[high]!.rpm!) high = j;
    }
    const kept = [...new Set([i, low, high, j - 1])].sort((a, b) => a - b);
    kept.forEach((k, nth) => {
      const point = points[k]!;
      d += `${pen || nth > 0 ? 'L' : 'M'}${x(point.t).toFixed(1)} ${y(point.rpm!).toFixed(1)}`;
    });
    if (!pen && kept.length === 1) d += 'h.01';
    pen = true;
    i = j;
  }
  return d;
}

/** The entry in force at an instant: the last at or before it; null before the first. Points are sorted. */
export function speedAt(points: readonly SpeedPoint[], t: number): number | null {
  let low = 0;
  let high = points.length - 1;
  let found = -1;
  while (low <= high) {
    const middle = (low + high) >> 1;
    if (points[middle]!.t <= t) {
      found = middle;
      low = middle + 1;
    } else high = middle - 1;
  }
  return found < 0 ? null : points[found]!.rpm;
}

/** Speed with the digits that its size leaves worth reading. */
export function axisNumber(rpm: number): string {
  const magnitude = Math.abs(rpm);
  const text = magnitude >= 100 ? magnitude.toFixed(0) : String(Number(magnitude.toPrecision(3)));
  return `${rpm < 0 && Number(text) !== 0 ? '\u2212' : ''}${text}`;
}

/** What stands at the left of a drawing of speed: its zero, its ends, and the unit between them. */
export function speedLabels(
  extremes: SpeedRange | null,
  y: (rpm: number) => number,
  top: number,
  bottom: number,
): { text: string; y: number }[] {
  const { low, high } = extremes ?? { low: 0, high: 0 };
  const labels = [{ text: '0', y: y(0) }];
  if (high > 0) labels.push({ text: axisNumber(high), y: y(high) });
  if (low < 0) labels.push({ text: axisNumber(low), y: y(low) });
  const unitY = high > 0 ? (y(high) + y(0)) / 2 : low < 0 ? (y(low) + y(0)) / 2 : top;
  return spreadLabels([...labels, { text: 'rpm', y: unitY }], 14, top, bottom);
}
