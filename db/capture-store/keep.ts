import { setImmediate as nextTurn } from 'node:timers/promises';
import { asStorageError } from '../errors';
import { newId } from '../ids';
import { getCapture, indexText, insertFindings, insertTags } from '../queries/captures';
import type { CaptureFinding, CaptureRecord } from '../queries/captures';
import type { Actor } from '../queries/common';
import type { RigRecord } from '../queries/rigs';
import type { SettingsRecord } from '../queries/settings';
import { bytesOf, sampleTypeOf } from '../sample-types';
import type { SampleType } from '../sample-types';
import type { TurnmarkDb } from '../schema';
import type { CaptureChunkTable } from '../schema/capture-chunk';
import { gapsOfCapture } from './capture-gaps';
import type { CaptureGap } from './capture-gaps';
import { ChunkCutter } from './chunk-cutter';
import type { Cut, Piece } from './chunk-cutter';
import { ChunkEncoder } from './chunk-codec';
import { buildPyramid } from './pyramid';

export type CaptureMeta = {
  rigId: string;
  title: string;
  tags: readonly string[];
  note: string;
  stream: string;
  /** Wall clock of the first sample, ms. */
  startedAtMs: number;
  rateHz: number;
  /** Kept in this order. */
  channels: readonly string[];
  by: Actor;
  nowMs: number;
  settings: SettingsRecord;
  rig: RigRecord;
  findings: readonly CaptureFinding[];
};

export type KeepInput = {
  meta: CaptureMeta;
  /** In order, on the axis of `fromIndex`; each piece may be reused by the source once the next is asked for. */
  source: Iterable<Piece> | AsyncIterable<Piece>;
  /** Of the source, on the same axis; parts outside are ignored. */
  gaps: readonly CaptureGap[];
  /** Becomes sample 0 of the capture. */
  fromIndex: number;
  /** Exclusive; where left out, the capture ends with the source's last sample. */
  toIndex?: number;
};

/** Rows are written once they are so large, several channels and chunks together: each write waits for the disk. */
const writeBytes = 256 * 1024;
/** So much is read before others get their turn of the event loop. */
const turnBytes = 256 * 1024;

/**
 * Stores a capture. It can be seen once all of it is there; a failure leaves nothing behind (what a kill leaves is
 * removed at the next opening). null: the source held no sample. Throws `StorageUnavailableError` on a full or failing
 * disk, and whatever the source throws.
 */
export async function keepCapture(db: TurnmarkDb, input: KeepInput): Promise<CaptureRecord | null> {
  const id = newId();
  let row: number | null = null;
  try {
    row = await insertUnkept(db, id, input.meta);
    const kept = await writeSamples(db, row, input);
    if (kept === null) {
      await discard(db, row);
      return null;
    }
    await finish(db, row, input.meta, kept);
    return await getCapture(db, id);
  } catch (error) {
    if (row !== null) await discard(db, row).catch(() => undefined);
    throw asStorageError(error);
  }
}

async function insertUnkept(db: TurnmarkDb, id: string, meta: CaptureMeta): Promise<number> {
  const { row } = await db
    .insertInto('capture')
    .values({
      id,
      rig_id: meta.rigId,
      kept: 0,
      title: meta.title,
      note: meta.note,
      stream: meta.stream,
      started_at_ms: Math.round(meta.startedAtMs),
      rate_hz: meta.rateHz,
      length_samples: 0,
      channels: JSON.stringify(meta.channels),
      created_at_ms: meta.nowMs,
      created_by: meta.by.name,
      created_by_id: meta.by.id,
      settings: JSON.stringify(meta.settings),
      rig: JSON.stringify(meta.rig),
    })
    .returning('row')
    .executeTakeFirstOrThrow();
  return row;
}

type Written = { lengthSamples: number; gaps: CaptureGap[] };

async function writeSamples(db: TurnmarkDb, row: number, input: KeepInput): Promise<Written | null> {
  const { meta, fromIndex, toIndex } = input;
  const known = input.gaps.map((gap) => ({ ...gap, fromIndex: gap.fromIndex - fromIndex }));
  const splitAt = known.filter((gap) => gap.lostSamples === 0).map((gap) => gap.fromIndex);
  const cutter = new ChunkCutter(meta.channels, splitAt);
  const writer = new ChunkWriter(db, row);
  let unbrokenBytes = 0;
  for await (const piece of input.source) {
    for (const cut of cutter.push({ ...piece, startIndex: piece.startIndex - fromIndex })) {
      await writer.add(cut);
    }
    unbrokenBytes += piece.channels.reduce((sum, c) => sum + c.samples.byteLength, 0);
    if (unbrokenBytes >= turnBytes) {
      unbrokenBytes = 0;
      await nextTurn();
    }
  }
  for (const cut of cutter.finish()) await writer.add(cut);
  await writer.flush();
  if (!writer.wrote) return null;
  const end = cutter.position;
  const lengthSamples = toIndex === undefined ? end : toIndex - fromIndex;
  if (end > lengthSamples) throw new RangeError(`keep: the source goes on after sample ${lengthSamples}`);
  const holes = end < lengthSamples ? [...cutter.holes, { from: end, to: lengthSamples }] : cutter.holes;
  return { lengthSamples, gaps: gapsOfCapture(holes, known, lengthSamples) };
}

/** Makes the capture visible, with all that belongs to it, at one stroke. */
async function finish(db: TurnmarkDb, row: number, meta: CaptureMeta, written: Written): Promise<void> {
  await db.transaction().execute(async (trx) => {
    for (const gap of written.gaps) {
      await trx
        .insertInto('capture_gap')
        .values({
          capture_row: row,
          from_index: gap.fromIndex,
          lost_samples: gap.lostSamples,
          estimated: gap.estimated ? 1 : 0,
        })
        .execute();
    }
    await insertTags(trx, row, meta.tags);
    await insertFindings(trx, row, meta.findings);
    await trx
      .updateTable('capture')
      .set({ kept: 1, length_samples: written.lengthSamples })
      .where('row', '=', row)
      .execute();
    await indexText(trx, row);
  });
}

async function discard(db: TurnmarkDb, row: number): Promise<void> {
  await db.deleteFrom('capture').where('row', '=', row).execute();
}

/** Encodes chunks and writes them, several rows at a time. */
class ChunkWriter {
  readonly #encoders = new Map<string, ChunkEncoder>();
  #pending: CaptureChunkTable[] = [];
  #pendingBytes = 0;
  wrote = false;

  constructor(
    private readonly db: TurnmarkDb,
    private readonly row: number,
  ) {}

  /** One channel after the other, each with the compressor's turn in between, so that no turn gets long. */
  async add({ startIndex, count, arrays }: Cut): Promise<void> {
    for (const [channel, samples] of arrays.entries()) {
      const type = sampleTypeOf(samples);
      const { codec, data } = await this.#encoder(channel, type).encode(samples);
      const pyramid = buildPyramid(samples, startIndex);
      this.#pending.push({
        capture_row: this.row,
        channel,
        start_index: startIndex,
        count,
        sample_type: type,
        codec,
        coarse: bytesOf(pyramid.coarse),
        middle: bytesOf(pyramid.middle),
        fine: bytesOf(pyramid.fine),
        data,
      });
      this.#pendingBytes += data.byteLength;
      if (this.#pendingBytes >= writeBytes) await this.flush();
    }
  }

  async flush(): Promise<void> {
    if (this.#pending.length === 0) return;
    await this.db.insertInto('capture_chunk').values(this.#pending).execute();
    this.#pending = [];
    this.#pendingBytes = 0;
    this.wrote = true;
  }

  #encoder(channel: number, type: SampleType): ChunkEncoder {
    const key = `${channel} ${type}`;
    const known = this.#encoders.get(key);
    if (known !== undefined) return known;
    const fresh = new ChunkEncoder();
    this.#encoders.set(key, fresh);
    return fresh;
  }
}
