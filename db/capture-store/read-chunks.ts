import { keptRow } from '../queries/captures';
import type { TurnmarkDb } from '../schema';
import type { CaptureGap } from './capture-gaps';
import type { Piece } from './chunk-cutter';
import { decodeChunk } from './chunk-codec';

/** What of a capture is to be read. Samples on the capture's axis, `toIndex` exclusive. */
export type ReadRange = { fromIndex: number; toIndex: number };

/** Key of a capture's chunks and the places of channels in it. Throws for a channel that it does not have. */
export async function findChannels(
  db: TurnmarkDb,
  captureId: string,
  wanted: readonly string[],
): Promise<{ row: number; places: number[]; lengthSamples: number } | null> {
  const row = await keptRow(db, captureId);
  if (row === null) return null;
  const { channels, length_samples } = await db
    .selectFrom('capture')
    .select(['channels', 'length_samples'])
    .where('row', '=', row)
    .executeTakeFirstOrThrow();
  const names = JSON.parse(channels) as string[];
  const places = wanted.map((name) => {
    const place = names.indexOf(name);
    if (place === -1) throw new RangeError(`capture ${captureId} has no channel "${name}"`);
    return place;
  });
  return { row, places, lengthSamples: length_samples };
}

/**
 * The samples of some channels, in order of time, all channels together in the order asked for, in the types in which
 * they came, cut to the range. No piece reaches across a gap. An unknown capture has none; a channel that the capture
 * does not have throws.
 */
export async function* readChunks(
  db: TurnmarkDb,
  captureId: string,
  channels: readonly string[],
  { fromIndex, toIndex }: ReadRange,
): AsyncGenerator<Piece> {
  const found = await findChannels(db, captureId, channels);
  if (found === null || channels.length === 0) return;
  const { row, places } = found;
  let start = await firstStart(db, row, fromIndex, toIndex);
  while (start !== null) {
    const rows = await db
      .selectFrom('capture_chunk')
      .select(['channel', 'count', 'sample_type', 'codec', 'data'])
      .where('capture_row', '=', row)
      .where('channel', 'in', places)
      .where('start_index', '=', start)
      .execute();
    const arrays = await Promise.all(
      places.map(async (place) => {
        const chunk = rows.find((r) => r.channel === place);
        if (chunk === undefined) throw new Error(`capture ${captureId} lacks a chunk at sample ${start}`);
        return await decodeChunk(chunk, chunk.sample_type, chunk.count);
      }),
    );
    const count = rows[0]!.count;
    const from = Math.max(0, fromIndex - start);
    const to = Math.min(count, toIndex - start);
    if (to > from) {
      yield {
        startIndex: start + from,
        count: to - from,
        channels: arrays.map((samples, i) => ({ name: channels[i]!, samples: samples.subarray(from, to) })),
      };
    }
    start = await nextStart(db, row, start, toIndex);
  }
}

/** In order, on the capture's axis. */
export async function readCaptureGaps(db: TurnmarkDb, captureId: string): Promise<CaptureGap[]> {
  const rows = await db
    .selectFrom('capture_gap')
    .innerJoin('capture', 'capture.row', 'capture_gap.capture_row')
    .select(['from_index', 'lost_samples', 'estimated'])
    .where('capture.id', '=', captureId)
    .where('capture.kept', '=', 1)
    .orderBy('from_index')
    .execute();
  return rows.map((gap) => ({
    fromIndex: gap.from_index,
    lostSamples: gap.lost_samples,
    estimated: gap.estimated === 1,
  }));
}

// All channels are cut alike: channel 0 stands for all.
function starts(db: TurnmarkDb, row: number) {
  return db
    .selectFrom('capture_chunk')
    .select('start_index')
    .where('capture_row', '=', row)
    .where('channel', '=', 0);
}

async function firstStart(db: TurnmarkDb, row: number, fromIndex: number, toIndex: number) {
  const holding = await starts(db, row)
    .where('start_index', '<=', fromIndex)
    .orderBy('start_index', 'desc')
    .limit(1)
    .executeTakeFirst();
  if (holding !== undefined && holding.start_index < toIndex) return holding.start_index;
  return await nextStart(db, row, fromIndex, toIndex);
}

async function nextStart(db: TurnmarkDb, row: number, after: number, toIndex: number) {
  const next = await starts(db, row)
    .where('start_index', '>', after)
    .where('start_index', '<', toIndex)
    .orderBy('start_index')
    .limit(1)
    .executeTakeFirst();
  return next?.start_index ?? null;
}
