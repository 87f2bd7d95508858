import type { TimeScale } from '@/client/drawings/time-axis';
import type { Columns, Range } from '@/client/drawings/trace';

export type EnvelopePaths = { fill: string; outline: string };

/** Most columns hold a good part of the swing: single teeth cannot be told apart any more. */
export function isDense(columns: Columns, time: TimeScale, range: Range): boolean {
  const [begin, end] = bounds(columns, time);
  const tall = (range.highV - range.lowV) * 0.35;
  let seen = 0;
  let dense = 0;
  for (let i = begin; i <= end; i++) {
    const a = columns.min[i];
    const b = columns.max[i];
    if (a == null || b == null) continue;
    seen += 1;
    if (b - a > tall) dense += 1;
  }
  return seen > 0 && dense / seen > 0.6;
}

/** Lowest and highest volts as an outlined surface, so that the band behind can be seen; broken where samples are missing. */
export function envelopePaths(
  columns: Columns,
  time: TimeScale,
  y: (volts: number) => number,
): EnvelopePaths {
  const { firstS, stepS, min, max } = columns;
  const [begin, end] = bounds(columns, time);
  let fill = '';
  let outline = '';
  let top: string[] = [];
  let bottom: string[] = [];
  const close = () => {
    if (top.length > 0) {
      fill += `M${top.join('L')}L${[...bottom].reverse().join('L')}Z`;
      outline += `M${top.join('L')}M${bottom.join('L')}`;
    }
    top = [];
    bottom = [];
  };
  for (let i = begin; i <= end; i++) {
    const a = min[i];
    const b = max[i];
    if (a == null || b == null) {
      close();
      continue;
    }
    const x = time.x(firstS + i * stepS).toFixed(1);
    top.push(`${x} ${y(b).toFixed(1)}`);
    bottom.push(`${x} ${y(a).toFixed(1)}`);
  }
  close();
  return { fill, outline };
}

function bounds({ firstS, stepS, min }: Columns, time: TimeScale): [begin: number, end: number] {
  const begin = Math.max(0, Math.floor((time.fromS - firstS) / stepS));
  return [begin, Math.min(min.length - 1, Math.ceil((time.toS - firstS) / stepS))];
}
