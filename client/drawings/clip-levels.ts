import type { Channel } from '@/signal/model';

export type ClipLevels = { clipLowV: number | null; clipHighV: number | null };

/**
 * Where a channel's input clips, V: the ends of the board's codes. A switching sensor stands at a rail by its nature,
 * which is no clipping.
 */
export function clipLevels(channel: Channel | undefined): ClipLevels {
  if (!channel || channel.sensor.kind !== 'linear' || channel.minCode === null || channel.maxCode === null) {
    return { clipLowV: null, clipHighV: null };
  }
  const ends = [channel.minCode, channel.maxCode].map(
    (code) => (code - channel.codeOffset) * channel.voltsPerCode,
  );
  return { clipLowV: Math.min(...ends), clipHighV: Math.max(...ends) };
}
