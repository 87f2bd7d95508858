/** Which stored samples a Keep means. Only what is on disk counts. */
import type { Spool, SpoolStream } from '@/db/spool-types';
import type { KeepPlan } from '@/server/hub/hub-types';

type Wish = { lastSeconds: number } | { stream: string; fromS: number; toS: number };

/**
 * `lastSeconds` counts back from the newest stored sample of the stream that had the newest block, and never reaches
 * into an older stream. null: nothing of it is held.
 * @param newest where that sample was when Keep was pressed, if samples of that stream came in the meantime.
 */
export function planKeep(
  spool: Spool,
  rigId: string,
  wish: Wish,
  newest?: { stream: string; endIndex: number },
): KeepPlan | null {
  const stream = 'stream' in wish ? spool.findStream(rigId, wish.stream) : spool.newestStream(rigId);
  if (stream === null) return null;
  const oldest = spool.oldestIndex(stream.streamId);
  if (oldest === null) return null;
  const end = newest?.stream === stream.name ? newest.endIndex : stream.nextIndex;
  const wanted =
    'stream' in wish
      ? { from: Math.round(wish.fromS * stream.rateHz), to: Math.round(wish.toS * stream.rateHz) }
      : { from: Math.round(end - wish.lastSeconds * stream.rateHz), to: end };
  const fromIndex = Math.max(oldest, wanted.from);
  const toIndex = Math.min(stream.nextIndex, wanted.to);
  if (toIndex <= fromIndex) return null;
  return {
    rigId,
    streamId: stream.streamId,
    stream: stream.name,
    rateHz: stream.rateHz,
    channels: stream.channels,
    fromIndex,
    toIndex,
    startedAtMs: wallClockOf(spool, stream, fromIndex),
  };
}

/** From the arrival of the segment that holds the sample: it came at its end. */
function wallClockOf(spool: Spool, stream: SpoolStream, index: number): number {
  const place = spool.segmentAt(stream.streamId, index);
  const end = place === null ? stream.nextIndex : place.startIndex + place.count;
  const endMs = place === null ? (stream.lastBlockAtMs ?? 0) : place.receivedAtMs;
  return Math.round(endMs - ((end - index) / stream.rateHz) * 1000);
}
