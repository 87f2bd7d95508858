import * as fc from 'fast-check';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { planColumns } from './capture-store/columns';
import { createCaptureStore } from './captures';
import type { CaptureStore, Columns, Piece } from './captures';
import type { Databases } from './open';
import { getCapture, listCaptures } from './queries/captures';
import { firstPage } from './queries/page';
import { newSampleArray, sampleTypes } from './sample-types';
import { captureMeta, inMemory } from './test-support/rig';
import type { SampleArray } from '@/signal/model';

let databases: Databases;
let store: CaptureStore;

beforeEach(() => {
  databases = inMemory();
  store = createCaptureStore(databases.db);
});
afterEach(() => databases.close());

const hex = (a: SampleArray) => Buffer.from(a.buffer, a.byteOffset, a.byteLength).toString('hex');
const unscaled = { voltsPerCode: 1, codeOffset: 0 };

function piece(startIndex: number, ...arrays: SampleArray[]): Piece {
  const names = ['A', 'B', 'C'];
  return {
    startIndex,
    count: arrays[0]!.length,
    channels: arrays.map((samples, i) => ({ name: names[i]!, samples })),
  };
}

/** Int16 noise with a slow swing, the same for the same index. */
function signal(from: number, count: number): Int16Array {
  return Int16Array.from({ length: count }, (_, k) => {
    const i = from + k;
    return Math.round(8000 * Math.sin(i / 700)) + ((Math.imul(i, 2_654_435_761) >>> 20) % 300);
  });
}

async function all(id: string, channels: string[], fromIndex: number, toIndex: number): Promise<Piece[]> {
  const pieces: Piece[] = [];
  for await (const p of store.readChunks(id, channels, { fromIndex, toIndex })) pieces.push(p);
  return pieces;
}

async function chunkCount(): Promise<number> {
  const { n } = await databases.db
    .selectFrom('capture_chunk')
    .select((eb) => eb.fn.countAll<number>().as('n'))
    .executeTakeFirstOrThrow();
  return n;
}

describe('keep and readChunks', () => {
  it('give back every sample bit for bit, in any types, pieces and gaps', async () => {
    const piecePlan = fc.record({
      skip: fc.oneof(fc.constant(0), fc.integer({ min: 1, max: 500 })),
      count: fc.oneof(fc.integer({ min: 1, max: 300 }), fc.integer({ min: 30_000, max: 70_000 })),
      types: fc.tuple(fc.constantFrom(...sampleTypes), fc.constantFrom(...sampleTypes)),
      seed: fc.integer(),
    });
    await fc.assert(
      fc.asyncProperty(
        fc.array(piecePlan, { minLength: 1, maxLength: 6 }),
        fc.integer({ min: 0, max: 1e9 }),
        async (plan, fromIndex) => {
          let at = fromIndex;
          const pieces = plan.map(({ skip, count, types, seed }) => {
            at += skip;
            const arrays = types.map((type, c) => {
              const samples = newSampleArray(type, count);
              const bytes = new Uint8Array(samples.buffer);
              for (let i = 0; i < bytes.length; i++)
                bytes[i] = Math.imul(i + c + seed, 2_654_435_761) >>> (i % 2 === 0 ? 24 : 29);
              return samples;
            });
            const made = piece(at, ...arrays);
            at += count;
            return made;
          });
          const meta = captureMeta({ channels: ['B', 'A'] });
          const capture = await store.keep({ meta, source: pieces, gaps: [], fromIndex });
          expect(capture?.lengthSamples).toBe(at - fromIndex);

          const back = await all(capture!.id, ['A', 'B'], 0, at);
          const joined = (from: Piece[], channel: number) =>
            from.map((p) => hex(p.channels[channel]!.samples)).join('');
          expect(joined(back, 0)).toBe(joined(pieces, 0));
          expect(joined(back, 1)).toBe(joined(pieces, 1));
          const starts = pieces.map((p) => p.startIndex - fromIndex);
          const kinds = (p: Piece) => p.channels.map((c) => c.samples.constructor.name).join();
          for (const p of back) {
            const origin = pieces[starts.findLastIndex((s) => s <= p.startIndex)]!;
            expect(kinds(p)).toBe(kinds(origin));
          }
          const gaps = await store.gaps(capture!.id);
          const lost = gaps.reduce((sum, g) => sum + g.lostSamples, 0);
          expect(lost).toBe(plan.reduce((sum, p) => sum + p.skip, 0));
        },
      ),
      { numRuns: 25 },
    );
  });

  it('cut what is read to the range, never across a gap', async () => {
    const source = [piece(0, signal(0, 100_000)), piece(100_050, signal(100_050, 50_000))];
    const gaps = [{ fromIndex: 100_000, lostSamples: 50, estimated: true }];
    const capture = await store.keep({ meta: captureMeta(), source, gaps, fromIndex: 0, toIndex: 160_000 });
    const back = await all(capture!.id, ['A'], 65_000, 100_100);
    expect(back.map((p) => [p.startIndex, p.count])).toEqual([
      [65_000, 536],
      [65_536, 34_464],
      [100_050, 50],
    ]);
    for (const p of back) expect(p.channels[0]!.samples).toEqual(signal(p.startIndex, p.count));
    expect(await store.gaps(capture!.id)).toEqual([
      { fromIndex: 100_000, lostSamples: 50, estimated: true },
      { fromIndex: 150_050, lostSamples: 9_950, estimated: false },
    ]);
    expect(await all(capture!.id, ['A'], 100_000, 100_050)).toEqual([]);
    expect(await all(capture!.id, ['A'], 150_050, 170_000)).toEqual([]);
    expect(await all('no such capture', ['A'], 0, 10)).toEqual([]);
    await expect(all(capture!.id, ['Q'], 0, 10)).rejects.toThrow('no channel "Q"');
  });

  it('split at a loss of no sample', async () => {
    const gaps = [{ fromIndex: 140, lostSamples: 0, estimated: true }];
    const capture = await store.keep({
      meta: captureMeta(),
      source: [piece(100, signal(0, 100))],
      gaps,
      fromIndex: 100,
    });
    expect((await all(capture!.id, ['A'], 0, 100)).map((p) => [p.startIndex, p.count])).toEqual([
      [0, 40],
      [40, 60],
    ]);
    expect(await store.gaps(capture!.id)).toEqual([{ fromIndex: 40, lostSamples: 0, estimated: true }]);
  });

  it('make a capture with all that was said of it', async () => {
    const by = { id: null, name: 'Ada' };
    const meta = captureMeta({
      by,
      tags: ['run-up', 'cold', 'run-up'],
      note: 'two missing',
      findings: [{ code: 'clipping', severity: 'warn', count: 3 }],
    });
    const kept = await store.keep({ meta, source: [piece(50, signal(0, 500))], gaps: [], fromIndex: 50 });
    expect(kept).toMatchObject({
      rigId: 'rig-1',
      title: 'Run-up',
      tags: ['run-up', 'cold'],
      note: 'two missing',
      startedAt: '1970-01-01T00:00:01.000Z',
      durationS: 0.5,
      createdBy: 'Ada',
      channels: ['A'],
      findings: [{ code: 'clipping', severity: 'warn', count: 3 }],
    });
    expect(kept!.rig.name).toBe('Vent winch');
    expect(await getCapture(databases.db, kept!.id)).toEqual(kept);
  });
});

describe('a keep that fails', () => {
  async function nothingLeft() {
    expect((await listCaptures(databases.db, firstPage)).items).toEqual([]);
    expect(await chunkCount()).toBe(0);
    expect(await databases.db.selectFrom('capture').select('id').execute()).toEqual([]);
  }

  it('in its source leaves nothing behind', async () => {
    async function* source() {
      for (let i = 0; i < 10; i++) yield piece(i * 65_536, signal(0, 65_536));
      await Promise.reject(new Error('the sender went away'));
    }
    await expect(
      store.keep({ meta: captureMeta(), source: source(), gaps: [], fromIndex: 0 }),
    ).rejects.toThrow('went away');
    await nothingLeft();
  });

  it('in the order of its pieces leaves nothing behind', async () => {
    const source = [piece(0, signal(0, 70_000)), piece(10, signal(0, 5))];
    await expect(store.keep({ meta: captureMeta(), source, gaps: [], fromIndex: 0 })).rejects.toThrow(
      RangeError,
    );
    await nothingLeft();
  });

  it('in a channel leaves nothing behind', async () => {
    const meta = captureMeta({ channels: ['A', 'B'] });
    await expect(
      store.keep({ meta, source: [piece(0, signal(0, 5))], gaps: [], fromIndex: 0 }),
    ).rejects.toThrow('"B" is missing');
    await nothingLeft();
  });

  it('for want of samples gives null and leaves nothing behind', async () => {
    expect(
      await store.keep({ meta: captureMeta(), source: [], gaps: [], fromIndex: 0, toIndex: 100 }),
    ).toBeNull();
    await nothingLeft();
  });

  it('is not seen before it is whole', async () => {
    const seen: number[] = [];
    async function* source() {
      yield piece(0, signal(0, 200_000));
      seen.push((await listCaptures(databases.db, firstPage)).items.length, await chunkCount());
      yield piece(200_000, signal(0, 1000));
    }
    await store.keep({ meta: captureMeta(), source: source(), gaps: [], fromIndex: 0 });
    expect(seen[0]).toBe(0);
    expect((await listCaptures(databases.db, firstPage)).items.length).toBe(1);
  });
});

describe('columns', () => {
  const length = 700_000;
  const scaling = { voltsPerCode: -0.002, codeOffset: 100 };
  let values: Float64Array;
  let id: string;

  beforeEach(async () => {
    values = new Float64Array(length).fill(NaN);
    const parts: Piece[] = [];
    for (const [from, to] of [
      [0, 100_003],
      [100_040, 300_000],
      [420_000, length],
    ] as const) {
      const samples = signal(from, to - from);
      samples.forEach((code, i) => (values[from + i] = (code - 100) * -0.002));
      parts.push(piece(from, samples));
    }
    id = (await store.keep({ meta: captureMeta(), source: parts, gaps: [], fromIndex: 0 }))!.id;
  });

  function expected(columns: Columns): Columns {
    if (columns.kind === 'raw') {
      return { ...columns, v: values.slice(columns.fromIndex, columns.fromIndex + columns.v.length) };
    }
    const min = new Float64Array(columns.min.length).fill(NaN);
    const max = new Float64Array(columns.min.length).fill(NaN);
    for (let k = 0; k < min.length; k++) {
      const from = columns.fromIndex + k * columns.stepSamples;
      for (let i = from; i < Math.min(length, from + columns.stepSamples); i++) {
        const v = values[i]!;
        if (!(min[k]! <= v) && !Number.isNaN(v)) min[k] = v;
        if (!(max[k]! >= v) && !Number.isNaN(v)) max[k] = v;
      }
    }
    return { ...columns, min, max };
  }

  it('are exactly the extremes of the samples, at any zoom', async () => {
    const ranges: [number, number, number][] = [
      [0, length, 1000],
      [0, length, 10],
      [0, length, 1],
      [1, length, 50],
      [99_990, 100_050, 100],
      [99_990, 100_050, 20],
      [50_000, 650_000, 1000],
      [290_000, 430_000, 64],
      [310_000, 310_500, 1000],
      [310_000, 390_000, 100],
      [123_457, 123_458, 1],
      [length - 10, length + 500, 1000],
    ];
    const levels = new Set<string>();
    for (const [fromIndex, toIndex, points] of ranges) {
      const columns = (await store.columns(id, { channel: 'A', fromIndex, toIndex, points, scaling }))!;
      expect(columns).toEqual(expected(columns));
      const count = columns.kind === 'raw' ? columns.v.length : columns.min.length;
      expect(count).toBeLessThanOrEqual(points);
      expect(columns.fromIndex).toBeLessThanOrEqual(fromIndex);
      expect(columns.fromIndex + count * columns.stepSamples).toBeGreaterThanOrEqual(
        Math.min(length, toIndex),
      );
      levels.add(
        columns.kind === 'raw' ? 'raw' : (planColumns(fromIndex, toIndex, points).level ?? 'samples'),
      );
    }
    expect([...levels].sort()).toEqual(['coarse', 'fine', 'middle', 'raw', 'samples']);
  });

  it('are exactly the extremes of the samples, at random', async () => {
    await fc.assert(
      fc.asyncProperty(
        fc.nat(length - 1),
        fc.integer({ min: 1, max: length }),
        fc.integer({ min: 1, max: 3000 }),
        async (from, span, points) => {
          const query = { channel: 'A', fromIndex: from, toIndex: from + span, points, scaling };
          const columns = (await store.columns(id, query))!;
          expect(columns).toEqual(expected(columns));
        },
      ),
      { numRuns: 60 },
    );
  });

  it('read the pyramid, not the samples, where a column is wide', async () => {
    await databases.db
      .updateTable('capture_chunk')
      .set({ data: new Uint8Array(0) })
      .execute();
    const wide = { channel: 'A', fromIndex: 0, toIndex: length, points: 1000, scaling };
    const columns = (await store.columns(id, wide))!;
    expect(columns).toEqual(expected(columns));
    await expect(store.columns(id, { ...wide, toIndex: 5000 })).rejects.toThrow();
  });

  it('leave volts as they are', async () => {
    const source = [piece(0, Float32Array.from([0.5, 1.5, -2.5, 3.5]))];
    const volts = await store.keep({ meta: captureMeta(), source, gaps: [], fromIndex: 0 });
    const query = { channel: 'A', fromIndex: 0, toIndex: 4, scaling };
    expect(await store.columns(volts!.id, { ...query, points: 4 })).toEqual({
      kind: 'raw',
      fromIndex: 0,
      stepSamples: 1,
      v: Float64Array.from([0.5, 1.5, -2.5, 3.5]),
    });
    expect(await store.columns(volts!.id, { ...query, points: 2 })).toEqual({
      kind: 'minmax',
      fromIndex: 0,
      stepSamples: 2,
      min: Float64Array.from([0.5, -2.5]),
      max: Float64Array.from([1.5, 3.5]),
    });
  });

  it('of what is not there', async () => {
    const query = { channel: 'A', fromIndex: 0, toIndex: 10, points: 10, scaling: unscaled };
    expect(await store.columns('no such capture', query)).toBeNull();
    await expect(store.columns(id, { ...query, channel: 'Q' })).rejects.toThrow('no channel "Q"');
    await expect(store.columns(id, { ...query, points: 0 })).rejects.toThrow(RangeError);
    expect(await store.columns(id, { ...query, fromIndex: length + 5, toIndex: length + 9 })).toEqual({
      kind: 'raw',
      fromIndex: length,
      stepSamples: 1,
      v: new Float64Array(0),
    });
  });
});
