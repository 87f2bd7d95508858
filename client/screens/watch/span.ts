import { countText, positionNouns } from '@/client/drawings/count-text';
import { durationText } from '@/client/drawings/time-axis';
import type { RibbonWish } from '@/server/contract';

/** How much of the signal the ribbon shows, and what stands at its right edge. */
export type Span = {
  unit: 'teeth' | 'time';
  teeth: number;
  spanS: number;
  anchor: 'edge' | 'now';
};

export const firstSpan: Span = { unit: 'teeth', teeth: 7, spanS: 0.5, anchor: 'edge' };

const teethSteps = [2, 4, 7, 12, 24, 60, 120, 200];
const timeSteps = [0.001, 0.002, 0.005, 0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1, 2, 5, 10, 20, 30, 60];

function neighbour(steps: readonly number[], now: number, way: 1 | -1): number {
  const found = way > 0 ? steps.find((s) => s > now * 1.001) : steps.findLast((s) => s < now * 0.999);
  return found ?? now;
}

/** The next longer (1) or shorter (-1) span; the same where there is none. */
export function stepSpan(span: Span, way: 1 | -1): Span {
  return span.unit === 'teeth'
    ? { ...span, teeth: neighbour(teethSteps, span.teeth, way) }
    : { ...span, spanS: neighbour(timeSteps, span.spanS, way) };
}

export function canStep(span: Span, way: 1 | -1): boolean {
  const next = stepSpan(span, way);
  return next.teeth !== span.teeth || next.spanS !== span.spanS;
}

/** To the other unit, at about the span that is shown now. */
export function switchUnit(span: Span, shownS: number | null): Span {
  if (span.unit === 'time') return { ...span, unit: 'teeth' };
  const near = shownS === null ? span.spanS : timeSteps.find((s) => s >= shownS * 0.8);
  return { ...span, unit: 'time', spanS: near ?? 60 };
}

/** What the hub is asked for: as many columns as the drawing has px, in steps, so that a resize is no flood. */
export function wishOf(span: Span, widthPx: number, aroundS: number | null = null): RibbonWish {
  const columns = Math.min(2000, Math.max(100, Math.ceil(widthPx / 100) * 100));
  const stretch = span.unit === 'teeth' ? { teeth: span.teeth } : { spanS: span.spanS };
  return { ...stretch, columns, anchor: span.anchor, ...(aroundS === null ? {} : { atS: aroundS }) };
}

export function spanText(span: Span, sensing: string): string {
  return span.unit === 'teeth' ? countText(span.teeth, ...positionNouns(sensing)) : durationText(span.spanS);
}
