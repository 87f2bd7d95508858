import { countText } from '@/client/drawings/count-text';
import { steadyRange, wantedRange } from '@/client/drawings/trace';
import type { Range } from '@/client/drawings/trace';
import type { LaneBox, RibbonData, RibbonLane } from '@/client/drawings/ribbon-types';

export const gutterPx = 52;
export const rightPx = 12;
export const railPx = 40;
export const axisPx = 28;
export const speedLanePx = 64;
const namePx = 20;
const lanePadPx = 8;
const thinLanePx = 44;

/**
 * Stacks the lanes above rail and axis. `focus` given: that lane gets the room and the others are thin; else all are
 * alike.
 */
export function stackLanes(
  lanes: readonly RibbonLane[],
  heightPx: number,
  focus: string | null,
  rangeOf: (lane: RibbonLane) => Range,
): LaneBox[] {
  const thinCount = focus !== null && lanes.length > 1 ? lanes.length - 1 : 0;
  const fullHeight =
    thinCount > 0
      ? Math.max(heightPx - thinCount * thinLanePx, thinLanePx)
      : heightPx / Math.max(lanes.length, 1);
  let y = 0;
  return lanes.map((lane) => {
    const thin = thinCount > 0 && lane.channel !== focus;
    const height = thin ? thinLanePx : fullHeight;
    const box: LaneBox = {
      lane,
      top: y,
      bottom: y + height,
      traceTop: y + (thin ? 4 : namePx),
      traceBottom: y + height - (thin ? 4 : lanePadPx),
      thin,
      range: rangeOf(lane),
    };
    y += height;
    return box;
  });
}

/** Volts to px within a lane. */
export function laneY({ traceTop, traceBottom, range }: LaneBox): (volts: number) => number {
  const scale = (traceBottom - traceTop) / (range.highV - range.lowV);
  return (volts) => traceBottom - (volts - range.lowV) * scale;
}

/** Keeps the range of each channel steady from frame to frame; the caller holds the map. */
export function keepRanges(held: Map<string, Range>, lane: RibbonLane): Range {
  const levels = [lane.lowV, lane.highV, ...lane.bands.flatMap((b) => [b.operateV, b.releaseV])];
  const range = steadyRange(held.get(lane.channel) ?? null, wantedRange(lane, levels));
  held.set(lane.channel, range);
  return range;
}

/** The ribbon in a sentence or two. */
export function ribbonSentence(data: RibbonData, spanText: string): string {
  const listed = data.edges.filter((e) => e.rising && e.channel === data.lanes[0]?.channel).length;
  const counted = data.counts?.teeth ?? listed;
  const lanes = data.lanes
    .map(
      (l) =>
        `${l.channel}${l.lowV === null || l.highV === null ? '' : ` from ${l.lowV.toFixed(2)} to ${l.highV.toFixed(2)} volts`}`,
    )
    .join(', ');
  const gaps = data.gaps.filter((g) => g.to > data.fromS && g.from < data.toS).length;
  const lost = gaps === 0 ? '' : ` ${countText(gaps, 'gap')} with lost samples.`;
  const crossings = data.counts?.rejected ?? data.rejected.length;
  const rejected = crossings === 0 ? '' : ` ${countText(crossings, 'crossing')} not counted.`;
  return `Signal over ${spanText}, ${data.lanes.length === 1 ? 'channel' : 'channels'} ${lanes || 'none'}. ${countText(counted, 'tooth', 'teeth')} counted.${rejected}${lost}`;
}
