import type { Database as Sqlite } from 'better-sqlite3';
import { asStorageError } from './errors';
import { layoutOf, PlanarPacker, unpackPlanar } from './planar-blob';
import { createPurge } from './spool-purge';
import { prepareSpool } from './spool-statements';
import type { SegmentRow, StreamRow } from './spool-statements';
import type { Spool, SpoolBatch, SpoolSegment, SpoolStream } from './spool-types';

/** The spool on an opened and migrated `spool.db`; raw prepared statements, since every block passes here. */
export function createSpool(sqlite: Sqlite): Spool {
  const q = prepareSpool(sqlite);
  const packer = new PlanarPacker();

  function write(batch: SpoolBatch): void {
    for (const s of batch.segments) {
      const data = packer.pack(s.channels, s.count);
      const layout = layoutOf(s.channels);
      q.insertSegment.run(
        s.streamId,
        s.startIndex,
        s.count,
        s.firstSeq,
        s.lastSeq,
        s.timeS,
        s.receivedAtMs,
        layout,
        data,
      );
    }
    for (const e of batch.early) {
      const count = e.channels[0]?.samples.length ?? 0;
      const data = packer.pack(e.channels, count);
      q.insertEarly.run(e.streamId, e.seq, count, e.timeS, e.receivedAtMs, layoutOf(e.channels), data);
    }
    for (const r of batch.releasedEarly) q.deleteEarly.run(r.streamId, r.seq);
    for (const g of batch.gaps) q.insertGap.run(g.streamId, g.fromIndex, g.lostSamples, g.estimated ? 1 : 0);
    for (const s of batch.streams) {
      const { changes } = q.updateStream.run(s.nextSeq, s.nextIndex, s.state, s.lastBlockAtMs, s.streamId);
      if (changes !== 1) throw new Error(`commit: stream ${s.streamId} was never opened`);
    }
  }

  const writing = <A extends unknown[], R>(action: (...args: A) => R) => {
    const transaction = sqlite.transaction(action);
    return (...args: A): R => {
      try {
        return transaction.immediate(...args);
      } catch (error) {
        throw asStorageError(error);
      }
    };
  };

  function* readSegments(streamId: number, fromIndex: number, toIndex: number): Generator<SpoolSegment> {
    if (toIndex <= fromIndex) return;
    let row = q.segmentHolding.get(streamId, fromIndex);
    if (row === undefined || row.start_index + row.count <= fromIndex) {
      row = q.segmentAfter.get(streamId, fromIndex, toIndex);
    }
    while (row !== undefined) {
      yield cut(row, fromIndex, toIndex);
      row = q.segmentAfter.get(streamId, row.start_index, toIndex);
    }
  }

  return {
    openStream: writing((s) => {
      const channels = JSON.stringify(s.channels);
      const row = q.insertStream.get(s.rigId, s.name, s.rateHz, channels, s.nowMs);
      if (row === undefined) throw new Error(`openStream: the rig has a stream "${s.name}" already`);
      return row.id;
    }),
    findStream: (rigId, name) => streamOf(q.streamByName.get(rigId, name)),
    streamById: (streamId) => streamOf(q.streamById.get(streamId)),
    newestStream: (rigId) => streamOf(q.newestStream.get(rigId)),
    streamsOf: (rigId, limit = 1000) => q.streamsOfRig.all(rigId, limit).map(toStream),
    recentStreams: (sinceMs) => q.recentStreams.all(sinceMs).map(toStream),
    commit: writing(write),
    readSegments,
    readGaps: (streamId, fromIndex, toIndex) =>
      q.gaps.all(streamId, toIndex, fromIndex, fromIndex).map((g) => ({
        fromIndex: g.from_index,
        lostSamples: g.lost_samples,
        estimated: g.estimated === 1,
      })),
    readEarly: (streamId) =>
      q.early.all(streamId).map((e) => ({
        seq: e.seq,
        count: e.count,
        timeS: e.time_s,
        receivedAtMs: e.received_at_ms,
        channels: unpackPlanar(e.data, e.layout, e.count),
      })),
    segmentAt(streamId, index) {
      const row = q.placeHolding.get(streamId, index);
      if (row === undefined || row.start_index + row.count <= index) return null;
      return {
        startIndex: row.start_index,
        count: row.count,
        receivedAtMs: row.received_at_ms,
        timeS: row.time_s,
      };
    },
    oldestIndex: (streamId) => q.oldest.get(streamId)?.start_index ?? null,
    purge: writing(createPurge(sqlite)),
    deleteRig: writing((rigId: string) => void q.orphanStreams.run(rigId)),
    size() {
      const pragma = (name: string) => Number(sqlite.pragma(name, { simple: true }));
      const pageBytes = pragma('page_size');
      return { fileBytes: pragma('page_count') * pageBytes, freeBytes: pragma('freelist_count') * pageBytes };
    },
  };
}

function cut(row: SegmentRow, fromIndex: number, toIndex: number): SpoolSegment {
  const from = Math.max(0, fromIndex - row.start_index);
  const to = Math.min(row.count, toIndex - row.start_index);
  return {
    startIndex: row.start_index + from,
    count: to - from,
    receivedAtMs: row.received_at_ms,
    channels: unpackPlanar(row.data, row.layout, row.count, from, to),
  };
}

function streamOf(row: StreamRow | undefined): SpoolStream | null {
  return row === undefined ? null : toStream(row);
}

function toStream(row: StreamRow): SpoolStream {
  return {
    streamId: row.id,
    rigId: row.rig_id,
    name: row.name,
    rateHz: row.rate_hz,
    channels: JSON.parse(row.channels) as string[],
    openedAtMs: row.opened_at_ms,
    nextSeq: row.next_seq,
    nextIndex: row.next_index,
    state: row.state,
    lastBlockAtMs: row.last_block_at_ms,
  };
}
