import type { TimeScale } from '@/client/drawings/time-axis';

export type RailDirection = 'forward' | 'reverse' | 'unknown';
export type RailEdge = { channel: string; t: number; rising: boolean; direction: RailDirection };

export type RailItem =
  | { kind: 'mark'; x: number; direction: RailDirection; minor: boolean }
  /** Marks too close to tell apart, merged. `count` of them. */
  | { kind: 'strip'; x0: number; x1: number; direction: RailDirection; count: number };

const roomForEveryEdgePx = 26;
const mergeBelowPx = 2;

/**
 * One mark a counted cycle (rising edges of the first channel); one an edge where there is room for that. Marks closer
 * than 2 px merge into strips, never into noise.
 */
export function railItems(
  edges: readonly RailEdge[],
  first: string | undefined,
  time: TimeScale,
): RailItem[] {
  const seen = edges.filter((e) => e.t >= time.fromS && e.t <= time.toS);
  const width = time.x(time.toS) - time.x(time.fromS);
  const all = seen.length * roomForEveryEdgePx <= width;
  const counted = (e: RailEdge) => e.channel === first && e.rising;
  const shown = seen.filter((e) => all || counted(e)).sort((a, b) => a.t - b.t);
  const items: RailItem[] = [];
  for (const edge of shown) {
    const x = time.x(edge.t);
    const last = items.at(-1);
    const lastX = last === undefined ? -Infinity : last.kind === 'mark' ? last.x : last.x1;
    if (last && last.direction === edge.direction && x - lastX < mergeBelowPx) {
      items[items.length - 1] =
        last.kind === 'mark'
          ? { kind: 'strip', x0: last.x, x1: x, direction: edge.direction, count: 2 }
          : { ...last, x1: x, count: last.count + 1 };
    } else items.push({ kind: 'mark', x, direction: edge.direction, minor: !counted(edge) });
  }
  return items;
}

/** Direction at an instant, from the stretches of an analysis (sorted, not overlapping). */
export function directionAt(
  stretches: readonly { from: number; to: number; value: RailDirection | 'stopped' }[],
  t: number,
): RailDirection {
  let low = 0;
  let high = stretches.length - 1;
  while (low <= high) {
    const middle = (low + high) >> 1;
    const stretch = stretches[middle]!;
    if (t < stretch.from) high = middle - 1;
    else if (t > stretch.to) low = middle + 1;
    else return stretch.value === 'stopped' ? 'unknown' : stretch.value;
  }
  return 'unknown';
}
