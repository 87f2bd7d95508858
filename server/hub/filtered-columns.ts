/** The newest samples as the band sees them: through the filter in force, warmed up on what came before the window. */
import type { Channel, Filter } from '@/signal/model';
import { createFilteredView } from '@/signal/filtered';
import type { Columns, RecentSignal } from '@/server/hub/recent-signal';
import { roundVolts } from '@/server/hub/recent-signal';

/** Periods of the filter's lowest corner after which its start no longer shows in a picture. */
const warmUpPeriods = 3;
const mostSamples = 400_000;

const list = (filter: Filter | Filter[]): Filter[] => (Array.isArray(filter) ? filter : [filter]);

/** A filter that takes the level away: raw volts and band would then stand far apart in one lane. */
export function takesLevelAway(filter: Filter | Filter[]): boolean {
  return list(filter).some(({ kind }) => kind === 'highpass' || kind === 'bandpass');
}

function warmUpSamples(filter: Filter | Filter[], rateHz: number): number {
  const corners = list(filter).flatMap((f) =>
    f.kind === 'none' ? [] : 'cutoffHz' in f ? [f.cutoffHz] : [f.lowHz],
  );
  return corners.length === 0 ? 0 : Math.ceil((warmUpPeriods * rateHz) / Math.min(...corners));
}

/** As `RecentSignal.columns`, of the filtered signal. The filter must be one that a pipeline runs at this rate. */
export function filteredColumns(
  signal: RecentSignal,
  channel: Channel,
  filter: Filter | Filter[],
  rateHz: number,
  firstIndex: number,
  group: number,
  count: number,
): Columns {
  const min: Columns['min'] = new Array<number | null>(count).fill(null);
  const max: Columns['max'] = new Array<number | null>(count).fill(null);
  const toIndex = firstIndex + group * count;
  const fromIndex = Math.max(firstIndex - warmUpSamples(filter, rateHz), toIndex - mostSamples);
  for (const { startIndex, samples } of signal.read(fromIndex, toIndex)) {
    const volts = new Float64Array(samples.length);
    createFilteredView(channel, filter, rateHz).run(samples, samples.length, volts, 0);
    for (let i = Math.max(0, firstIndex - startIndex); i < volts.length; i += 1) {
      const column = Math.floor((startIndex + i - firstIndex) / group);
      const v = volts[i] as number;
      const low = min[column];
      const high = max[column];
      if (low == null || v < low) min[column] = v;
      if (high == null || v > high) max[column] = v;
    }
  }
  const rounded = (values: Columns['min']) => values.map((v) => (v === null ? null : roundVolts(v)));
  return { min: rounded(min), max: rounded(max) };
}
