import * as fc from 'fast-check';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { StorageUnavailableError } from './errors';
import { openFile } from './open';
import { newSampleArray, sampleTypes } from './sample-types';
import { createSpool } from './spool';
import { spoolMigrations } from './spool-migrations';
import type { SegmentWrite, Spool, SpoolBatch } from './spool-types';
import type { Database as Sqlite } from 'better-sqlite3';

let sqlite: Sqlite;
let spool: Spool;
let streamId: number;

beforeEach(() => {
  sqlite = openFile(':memory:', {
    name: 'spool.db',
    applicationId: 1,
    migrations: spoolMigrations,
    synchronous: 'NORMAL',
    exclusive: true,
  });
  spool = createSpool(sqlite);
  streamId = spool.openStream({ rigId: 'rig', name: 'boot-1', rateHz: 1000, channels: ['A'], nowMs: 1 });
});
afterEach(() => {
  sqlite.close();
});

const nothing: SpoolBatch = { segments: [], early: [], releasedEarly: [], gaps: [], streams: [] };

/** Samples that are their own index. */
function segment(startIndex: number, count: number, over: Partial<SegmentWrite> = {}): SegmentWrite {
  const samples = Int32Array.from({ length: count }, (_, i) => startIndex + i);
  return {
    streamId,
    startIndex,
    count,
    firstSeq: startIndex,
    lastSeq: startIndex,
    timeS: null,
    receivedAtMs: 1000 + startIndex,
    channels: [{ name: 'A', samples }],
    ...over,
  };
}

function read(from: number, to: number, id = streamId): number[] {
  return [...spool.readSegments(id, from, to)].flatMap((s) => {
    const values = Array.from(s.channels[0]!.samples);
    expect(values.length).toBe(s.count);
    expect(values[0]).toBe(s.startIndex);
    return values;
  });
}

const range = (from: number, to: number) =>
  Array.from({ length: Math.max(0, to - from) }, (_, i) => from + i);

describe('segments', () => {
  it('come back bit for bit, in every type and any mixture of them', () => {
    const anyArray = (count: number) =>
      fc.constantFrom(...sampleTypes).chain((type) => {
        const bytes = newSampleArray(type, count).byteLength;
        return fc.uint8Array({ minLength: bytes, maxLength: bytes }).map((filled) => {
          const samples = newSampleArray(type, count);
          new Uint8Array(samples.buffer).set(filled);
          return samples;
        });
      });
    const written = fc
      .integer({ min: 1, max: 40 })
      .chain((count) => fc.array(anyArray(count), { minLength: 1, maxLength: 8 }));
    let start = 0;
    fc.assert(
      fc.property(written, (arrays) => {
        const channels = arrays.map((samples, i) => ({ name: `c${i}`, samples }));
        const count = arrays[0]!.length;
        spool.commit({ ...nothing, segments: [segment(start, count, { channels })] });
        const [back, ...more] = [...spool.readSegments(streamId, start, start + count)];
        start += count;
        expect(more).toEqual([]);
        back!.channels.forEach(({ name, samples }, i) => {
          expect(name).toBe(`c${i}`);
          expect(samples.constructor).toBe(arrays[i]!.constructor);
          const bytes = (a: { buffer: ArrayBufferLike; byteOffset: number; byteLength: number }) =>
            Buffer.from(a.buffer, a.byteOffset, a.byteLength).toString('hex');
          expect(bytes(samples)).toBe(bytes(arrays[i]!));
        });
      }),
      { numRuns: 300 },
    );
  });

  it('are cut to any range asked for, across gaps', () => {
    spool.commit({ ...nothing, segments: [segment(0, 10), segment(10, 5)] });
    spool.commit({ ...nothing, segments: [segment(20, 10)] });
    const held = [...range(0, 15), ...range(20, 30)];
    for (let from = 0; from <= 31; from++) {
      for (let to = from; to <= 31; to++) {
        expect(read(from, to)).toEqual(held.filter((i) => i >= from && i < to));
      }
    }
    expect(spool.oldestIndex(streamId)).toBe(0);
  });

  it('are read while others are committed', () => {
    spool.commit({ ...nothing, segments: [segment(0, 4), segment(4, 4)] });
    const reading = spool.readSegments(streamId, 0, 100);
    expect(reading.next().value?.startIndex).toBe(0);
    spool.commit({ ...nothing, segments: [segment(8, 4)] });
    expect([...reading].map((s) => s.startIndex)).toEqual([4, 8]);
  });

  it('are copied on commit: the caller may reuse its arrays', () => {
    const samples = Int32Array.from([0, 1, 2]);
    spool.commit({ ...nothing, segments: [segment(0, 3, { channels: [{ name: 'A', samples }] })] });
    samples.fill(9);
    expect(read(0, 3)).toEqual([0, 1, 2]);
  });

  it('are found by a sample without being read', () => {
    spool.commit({ ...nothing, segments: [segment(0, 10), segment(20, 10, { timeS: 2.5 })] });
    expect(spool.segmentAt(streamId, 9)?.startIndex).toBe(0);
    expect(spool.segmentAt(streamId, 10)).toBeNull();
    expect(spool.segmentAt(streamId, 20)).toEqual({
      startIndex: 20,
      count: 10,
      receivedAtMs: 1020,
      timeS: 2.5,
    });
    expect(spool.segmentAt(streamId, 30)).toBeNull();
  });
});

describe('a commit', () => {
  it('is one transaction: what cannot be stored takes nothing else with it', () => {
    spool.commit({ ...nothing, segments: [segment(0, 10)] });
    const state = { streamId, nextSeq: 1, nextIndex: 10, state: 'x', lastBlockAtMs: 5 };
    expect(() =>
      spool.commit({ ...nothing, streams: [state], segments: [segment(10, 5), segment(0, 10)] }),
    ).toThrow('UNIQUE');
    expect(read(0, 100)).toEqual(range(0, 10));
    expect(spool.findStream('rig', 'boot-1')?.nextSeq).toBeNull();
    expect(() => spool.commit({ ...nothing, streams: [{ ...state, streamId: 99 }] })).toThrow('stream 99');
    const uneven = [{ name: 'A', samples: new Int16Array(3) }];
    expect(() => spool.commit({ ...nothing, segments: [segment(10, 4, { channels: uneven })] })).toThrow(
      'wanted 4',
    );
  });

  it('on a full disk throws a typed error, keeps the old and works again with room', () => {
    spool.commit({ ...nothing, segments: [segment(0, 10)] });
    const pages = Number(sqlite.pragma('page_count', { simple: true }));
    sqlite.pragma(`max_page_count = ${pages + 2}`);
    const big = segment(10, 40_000);
    let thrown: unknown;
    try {
      spool.commit({ ...nothing, segments: [big] });
    } catch (error) {
      thrown = error;
    }
    expect(thrown).toBeInstanceOf(StorageUnavailableError);
    expect((thrown as StorageUnavailableError).code).toBe('full');
    expect(read(0, 100)).toEqual(range(0, 10));
    expect(sqlite.pragma('integrity_check', { simple: true })).toBe('ok');
    sqlite.pragma('max_page_count = 1000000');
    spool.commit({ ...nothing, segments: [big] });
    expect(read(0, 50_000).length).toBe(40_010);
  });
});

describe('early blocks', () => {
  it('wait in the order of their numbers until released', () => {
    const early = (seq: number) => ({
      streamId,
      seq,
      timeS: seq / 10,
      receivedAtMs: 7,
      channels: [{ name: 'A', samples: new Uint16Array([seq]) }],
    });
    spool.commit({ ...nothing, early: [early(9), early(3)] });
    expect(spool.readEarly(streamId)).toEqual([
      {
        seq: 3,
        count: 1,
        timeS: 0.3,
        receivedAtMs: 7,
        channels: [{ name: 'A', samples: new Uint16Array([3]) }],
      },
      {
        seq: 9,
        count: 1,
        timeS: 0.9,
        receivedAtMs: 7,
        channels: [{ name: 'A', samples: new Uint16Array([9]) }],
      },
    ]);
    spool.commit({ ...nothing, releasedEarly: [{ streamId, seq: 3 }], segments: [segment(0, 1)] });
    expect(spool.readEarly(streamId).map((e) => e.seq)).toEqual([9]);
  });
});

describe('gaps', () => {
  it('are found where they touch a range', () => {
    const gaps = [
      { streamId, fromIndex: 10, lostSamples: 5, estimated: false },
      { streamId, fromIndex: 20, lostSamples: 0, estimated: true },
    ];
    spool.commit({ ...nothing, gaps });
    const plain = gaps.map(({ fromIndex, lostSamples, estimated }) => ({
      fromIndex,
      lostSamples,
      estimated,
    }));
    expect(spool.readGaps(streamId, 0, 100)).toEqual(plain);
    expect(spool.readGaps(streamId, 0, 10)).toEqual([]);
    expect(spool.readGaps(streamId, 14, 15)).toEqual([plain[0]]);
    expect(spool.readGaps(streamId, 15, 20)).toEqual([]);
    expect(spool.readGaps(streamId, 15, 21)).toEqual([plain[1]]);
  });

  it('that meet are one', () => {
    const gap = { streamId, fromIndex: 10, lostSamples: 5, estimated: false };
    spool.commit({ ...nothing, gaps: [gap, { ...gap, lostSamples: 2, estimated: true }] });
    expect(spool.readGaps(streamId, 0, 100)).toEqual([{ fromIndex: 10, lostSamples: 7, estimated: true }]);
  });
});

describe('streams', () => {
  it('are unique within a rig and remember their state', () => {
    const again = { rigId: 'rig', name: 'boot-1', rateHz: 1, channels: ['A'], nowMs: 2 };
    expect(spool.openStream({ ...again, rigId: 'other' })).not.toBe(streamId);
    spool.commit({
      ...nothing,
      streams: [{ streamId, nextSeq: 2 ** 32, nextIndex: 2 ** 40, state: '{"a":1}', lastBlockAtMs: 9 }],
    });
    expect(spool.findStream('rig', 'boot-1')).toEqual({
      streamId,
      rigId: 'rig',
      name: 'boot-1',
      rateHz: 1000,
      channels: ['A'],
      openedAtMs: 1,
      nextSeq: 2 ** 32,
      nextIndex: 2 ** 40,
      state: '{"a":1}',
      lastBlockAtMs: 9,
    });
    expect(spool.findStream('rig', 'boot-2')).toBeNull();
    expect(() => spool.openStream(again)).toThrow('already');
  });

  it('begin anew where the process ended before anything of them was committed', () => {
    const again = { rigId: 'rig', name: 'boot-1', rateHz: 250, channels: ['A', 'B'], nowMs: 2 };
    expect(spool.openStream(again)).toBe(streamId);
    expect(spool.findStream('rig', 'boot-1')).toMatchObject({ rateHz: 250, channels: ['A', 'B'] });
  });

  it('are listed by their newest block', () => {
    const second = spool.openStream({ rigId: 'rig', name: 'boot-2', rateHz: 1, channels: ['A'], nowMs: 2 });
    expect(spool.newestStream('rig')).toBeNull();
    const state = { nextSeq: 1, nextIndex: 1, state: '' };
    spool.commit({ ...nothing, streams: [{ ...state, streamId: second, lastBlockAtMs: 50 }] });
    spool.commit({ ...nothing, streams: [{ ...state, streamId, lastBlockAtMs: 60 }] });
    expect(spool.newestStream('rig')?.streamId).toBe(streamId);
    expect(spool.streamsOf('rig').map((s) => s.streamId)).toEqual([streamId, second]);
    expect(spool.recentStreams(55).map((s) => s.streamId)).toEqual([streamId]);
  });
});

describe('purge', () => {
  it('drops the oldest first, a few at a time, and forgets gaps before what is left', () => {
    spool.commit({
      ...nothing,
      segments: [segment(0, 10), segment(10, 10), segment(25, 10), segment(35, 10)],
      gaps: [{ streamId, fromIndex: 20, lostSamples: 5, estimated: false }],
    });
    expect(spool.purge(1030, 2, [])).toBe(2);
    expect(spool.oldestIndex(streamId)).toBe(25);
    expect(spool.readGaps(streamId, 0, 100)).toEqual([]);
    expect(spool.purge(1030, 2, [])).toBe(1);
    expect(spool.purge(1030, 2, [])).toBe(0);
    expect(read(0, 100)).toEqual(range(35, 45));
  });

  it('leaves held stretches alone', () => {
    spool.commit({ ...nothing, segments: [0, 10, 20, 30].map((i) => segment(i, 10)) });
    expect(spool.purge(9999, 10, [{ streamId, fromIndex: 19, toIndex: 21 }])).toBe(2);
    expect(read(0, 100)).toEqual(range(10, 30));
    expect(spool.purge(9999, 10, [{ streamId: streamId + 1, fromIndex: 0, toIndex: 100 }])).toBe(2);
    expect(read(0, 100)).toEqual([]);
  });

  it('keeps the row of the stream for ever', () => {
    const state = { streamId, nextSeq: 7, nextIndex: 10, state: '', lastBlockAtMs: 1 };
    spool.commit({ ...nothing, segments: [segment(0, 10)], streams: [state] });
    spool.purge(9999, 10, []);
    expect(spool.findStream('rig', 'boot-1')?.nextSeq).toBe(7);
  });

  it('drops early blocks that nobody came back for', () => {
    const early = {
      streamId,
      seq: 5,
      timeS: null,
      receivedAtMs: 1,
      channels: [{ name: 'A', samples: new Uint8Array(1) }],
    };
    spool.commit({ ...nothing, early: [early, { ...early, seq: 6, receivedAtMs: 100 }] });
    expect(spool.purge(50, 10, [])).toBe(1);
    expect(spool.readEarly(streamId).map((e) => e.seq)).toEqual([6]);
  });

  it('takes the samples of a deleted rig whatever their age, held ones last, and leaves other rigs', () => {
    const other = spool.openStream({ rigId: 'other', name: 'boot-1', rateHz: 1, channels: ['A'], nowMs: 2 });
    const early = {
      streamId,
      seq: 5,
      timeS: null,
      receivedAtMs: 1,
      channels: [{ name: 'A', samples: new Uint8Array(1) }],
    };
    spool.commit({
      ...nothing,
      segments: [segment(0, 10), segment(10, 10), segment(0, 10, { streamId: other })],
      early: [early],
      gaps: [{ streamId, fromIndex: 20, lostSamples: 5, estimated: false }],
    });
    spool.deleteRig('rig');
    expect(spool.streamsOf('rig')).toEqual([]);
    expect(spool.findStream('rig', 'boot-1')).toBeNull();
    spool.openStream({ rigId: 'rig', name: 'boot-1', rateHz: 1, channels: ['A'], nowMs: 3 });
    expect(spool.purge(0, 100, [{ streamId, fromIndex: 0, toIndex: 5 }])).toBe(2);
    expect(read(0, 100)).toEqual(range(0, 10));
    expect(spool.purge(0, 100, [])).toBe(1);
    expect(sqlite.prepare('SELECT count(*) FROM stream WHERE id = ?').pluck().get(streamId)).toBe(0);
    expect(sqlite.prepare('SELECT count(*) FROM gap').pluck().get()).toBe(0);
    expect(read(0, 100, other)).toEqual(range(0, 10));
  });
});
