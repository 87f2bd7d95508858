import type { LiveFrame } from '@/server/contract';
import { clipLevels } from '@/client/drawings/clip-levels';
import { countText, positionNouns } from '@/client/drawings/count-text';
import type { RibbonData } from '@/client/drawings/ribbon-types';
import type { SpeedPoint } from '@/client/drawings/speed-line';
import type { Channel } from '@/signal/model';

type FrameRibbon = NonNullable<LiveFrame['ribbon']>;

/** What a frame says of the signal, as the ribbon draws it: the band stands still for the length of a window. */
export function ribbonDataOf(ribbon: FrameRibbon, channels: readonly Channel[] = []): RibbonData {
  const { fromS, toS, firstS, stepS, edges, rejected, gaps, edgeCounts } = ribbon;
  const first = edgeCounts.find((c) => c.channel === ribbon.lanes[0]?.channel);
  const thinned = edgeCounts.reduce((sum, c) => sum + c.edges, 0) > edges.length;
  return {
    fromS,
    toS,
    edges,
    // A tooth has two edges, and of thinned marks their kinds are not known.
    ...(thinned && first
      ? {
          counts: {
            teeth: Math.round(first.edges / 2),
            rejected: edgeCounts.reduce((sum, c) => sum + c.rejected, 0),
          },
        }
      : {}),
    rejected,
    gaps,
    lanes: ribbon.lanes.map(({ operateV, releaseV, ...lane }) => ({
      ...lane,
      ...clipLevels(channels.find((c) => c.name === lane.channel)),
      firstS,
      stepS,
      bands: operateV === null || releaseV === null ? [] : [{ from: fromS, to: toS, operateV, releaseV }],
    })),
  };
}

/** The last minute, `t` counting up to now at 0. */
export function sparkPoints(
  history: { agoS: number[]; rpm: (number | null)[] } | null | undefined,
): SpeedPoint[] {
  if (!history) return [];
  return history.agoS
    .map((agoS, i) => ({ t: -agoS, rpm: history.rpm[i] ?? null }))
    .filter((point) => point.t >= -60);
}

/** "24 teeth a turn", kept in one line. */
export function teethWords(count: number, sensing: string): string {
  return `${countText(count, ...positionNouns(sensing))} a turn`.replaceAll(' ', '\u00a0');
}

/** 20000 reads "20 kS/s". */
export function rateText(hz: number): string {
  if (hz >= 1e6) return `${Number((hz / 1e6).toPrecision(3))} MS/s`;
  return hz >= 1000 ? `${Number((hz / 1000).toPrecision(3))} kS/s` : `${Number(hz.toPrecision(3))} S/s`;
}
