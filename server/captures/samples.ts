/** What a picture of a capture is drawn from: at most so many columns, or the samples themselves where fewer. */
import type { CaptureRecord, CaptureStore } from '@/db';
import type { Samples } from '@/server/contract';

export type SamplesWish = { channel: string; fromS: number; toS: number; points: number };

/** JSON has no NaN: what is not there is null. */
export function voltsOrNull(values: Float64Array): (number | null)[] {
  return Array.from(values, (v) => (Number.isNaN(v) ? null : v));
}

/** null: the capture is gone. */
export async function rawSamples(
  store: CaptureStore,
  capture: CaptureRecord,
  { channel, fromS, toS, points }: SamplesWish,
): Promise<Samples | null> {
  const { rateHz } = capture;
  const setup = capture.rig.channels.find(({ name }) => name === channel);
  if (setup === undefined) throw new Error(`capture ${capture.id} has no setup of channel ${channel}`);
  const columns = await store.columns(capture.id, {
    channel,
    fromIndex: Math.round(fromS * rateHz),
    toIndex: Math.round(toS * rateHz),
    points,
    scaling: setup,
  });
  if (columns === null) return null;
  const place = { channel, rateHz, fromS: columns.fromIndex / rateHz, stepS: columns.stepSamples / rateHz };
  return columns.kind === 'raw'
    ? { ...place, kind: 'raw', v: voltsOrNull(columns.v) }
    : { ...place, kind: 'minmax', min: voltsOrNull(columns.min), max: voltsOrNull(columns.max) };
}
