/** The part of a capture that statistics of teeth are made from: the longest in which speed was known all along. */
import type { Analysis } from '@/signal/model';

export type Stretch = { from: number; to: number };

/** A stop, a gap or a reversal ends a stretch: each opens an unknown one. Null where no speed is known anywhere. */
export function longestStretch(speed: Analysis['speed']): Stretch | null {
  let best: Stretch | null = null;
  let from = NaN;
  for (const { t, rpm } of speed) {
    if (rpm === null || rpm === 0) {
      from = NaN;
      continue;
    }
    if (Number.isNaN(from)) from = t;
    if (!best || t - from > best.to - best.from) best = { from, to: t };
  }
  return best && best.to > best.from ? best : null;
}

/** Instants of one flank within the stretch, s. */
export function flanksWithin(
  edges: Analysis['channels'][string]['edges'],
  { from, to }: Stretch,
  rising: boolean,
): number[] {
  const instants: number[] = [];
  for (const edge of edges) {
    if (edge.midT > to) break;
    if (edge.rising === rising && edge.midT >= from) instants.push(edge.midT);
  }
  return instants;
}
