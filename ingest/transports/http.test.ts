import { Encoder } from 'cbor-x';
import { describe, expect, it } from 'vitest';
import { createMemorySink } from '../memory-sink';
import { bodyLimit, createHttpIngest } from './http';
import type { IngestRequest } from './http-types';
import { createIdempotencyMemory } from './idempotency';

const encoder = new Encoder({ useRecords: false });
const rigId = 'rig-1';

function setUp(options: { autoCommit?: boolean; maxRigBytes?: number } = {}) {
  const { autoCommit = true, maxRigBytes } = options;
  let ms = 1_700_000_000_000;
  let names = 0;
  const sink = createMemorySink({ channels: ['A', 'B'], autoCommit });
  const http = createHttpIngest({
    sink,
    maxRigBytes,
    idempotency: createIdempotencyMemory(() => ms),
    nowMs: () => ms,
    newStreamName: () => `made-${++names}`,
    pause: () => Promise.resolve(),
  });
  const post = (
    type: string | undefined,
    body: unknown,
    headers: Record<string, string> = {},
    codes = false,
  ) =>
    http.handle({
      rigId,
      codes,
      headers: { ...headers, 'content-type': type },
      body:
        body instanceof Uint8Array
          ? body
          : Buffer.from(typeof body === 'string' ? body : JSON.stringify(body)),
    } satisfies IngestRequest);
  const later = (moreMs: number): void => {
    ms += moreMs;
  };
  return { sink, http, post, later };
}

const block = (seq: number, fields: object = {}) => ({
  stream: 's',
  seq,
  rate: 1000,
  samples: { A: [1, 2, 3] },
  ...fields,
});
const csv = (rows: number, firstS = 0): string =>
  't,A,B\n' + Array.from({ length: rows }, (_, i) => `${firstS + i / 1000},${i},1\n`).join('');
const senml = [
  { bn: 'urn:dev:x:', bu: 'V', n: 'A', t: -0.002, v: 1 },
  { n: 'A', t: -0.001, v: 2 },
  { n: 'A', v: 3 },
];

describe('POST of blocks', () => {
  it('answers 202 with the last seq and samples of one channel', async () => {
    const { post } = setUp();
    expect(await post('application/json; charset=utf-8', block(41))).toEqual({
      status: 202,
      headers: { 'content-type': 'application/json' },
      body: { stream: 's', seq: 41, accepted: 3, duplicates: 0 },
    });
    const body = encoder.encode([block(41), block(42), block(43)]);
    expect(await post('application/cbor', body)).toMatchObject({
      status: 202,
      body: { stream: 's', seq: 43, accepted: 6, duplicates: 3 },
    });
  });

  it('answers after the commit, not before', async () => {
    const { post, sink } = setUp({ autoCommit: false });
    let answered = false;
    const answer = post('application/json', block(0)).then((response) => {
      answered = true;
      return response;
    });
    await Promise.resolve();
    await Promise.resolve();
    expect(answered).toBe(false);
    expect(sink.pending()).toBe(1);
    sink.commit();
    expect(await answer).toMatchObject({ status: 202 });
  });

  it('a single refused block is its own problem', async () => {
    const { post } = setUp();
    expect(await post('application/json', block(0, { samples: { A: [1], C: [2] } }))).toEqual({
      status: 422,
      headers: { 'content-type': 'application/problem+json' },
      body: {
        type: 'urn:turnmark:problem:invalid',
        title: 'The message is not valid',
        status: 422,
        detail: 'The rig has no channel "C".',
        pointer: '/samples/C',
        stream: 's',
        seq: 0,
      },
    });
    await post('application/json', block(0));
    expect(await post('application/json', block(1, { rate: 2000 }))).toMatchObject({
      status: 422,
      body: { type: 'urn:turnmark:problem:stream-changed', seq: 1 },
    });
  });

  it('a batch keeps its good blocks and lists all', async () => {
    const { post, sink } = setUp();
    await post('application/json', block(0));
    const batch = [
      block(0),
      block(1),
      block(2, { samples: { A: ['x'] } }),
      block(3, { samples: { C: [1] } }),
      block(4),
      5,
    ];
    const response = await post('application/json', batch);
    expect(response).toMatchObject({
      status: 422,
      headers: { 'content-type': 'application/problem+json' },
      body: {
        type: 'urn:turnmark:problem:invalid',
        blocks: [
          { stream: 's', seq: 0, result: 'duplicate' },
          { stream: 's', seq: 1, result: 'accepted' },
          { stream: 's', seq: 2, result: 'refused', problem: { pointer: '/2/samples/A/0', status: 422 } },
          { stream: 's', seq: 3, result: 'refused', problem: { pointer: '/samples/C' } },
          { stream: 's', seq: 4, result: 'accepted' },
          { result: 'refused', problem: { pointer: '/5' } },
        ],
      },
    });
    expect(sink.blocks.map((entry) => entry.block.seq)).toEqual([0, 1, 4]);
    expect(sink.gaps).toMatchObject([{ gap: { fromSeq: 2, missingBlocks: 2 } }]);
  });

  it.each([
    ['application/json', '{"stream":', 400, 'unreadable'],
    ['application/cbor', Buffer.of(0x9f), 400, 'unreadable'],
    ['text/csv', '', 400, 'unreadable'],
    ['application/senml+json', '[', 400, 'unreadable'],
    ['application/senml+cbor', Buffer.of(0x9f), 400, 'unreadable'],
    ['application/json', Buffer.alloc(1024 * 1024 + 1, 0x20), 413, 'too-large'],
    ['text/plain', 'x', 415, 'content-type'],
    ['application/json; charset=latin1', '{}', 415, 'content-type'],
    ['constructor', '{}', 415, 'content-type'],
    [undefined, '{}', 415, 'content-type'],
  ])('%s of %j is %i %s', async (type, body, status, slug) => {
    const { post } = setUp();
    const response = await post(type, body);
    expect(response).toMatchObject({ status, body: { type: `urn:turnmark:problem:${slug}`, status } });
    expect(response.headers['content-type']).toBe('application/problem+json');
  });

  it('says when the spool cannot store, and takes the same blocks later', async () => {
    const { post, sink } = setUp();
    sink.fail('The disk is full.');
    expect(await post('application/json', [block(0), block(1)])).toMatchObject({
      status: 503,
      headers: { 'retry-after': '1' },
      body: { type: 'urn:turnmark:problem:spool-unavailable', detail: 'The disk is full.' },
    });
    expect(await post('text/csv', csv(10))).toMatchObject({ status: 503 });
    sink.fail(undefined);
    expect(await post('application/json', [block(0), block(1)])).toMatchObject({
      status: 202,
      body: { accepted: 6 },
    });
  });

  it('asks a rig that sends faster than is stored to wait', async () => {
    const { post, sink, http } = setUp({ autoCommit: false, maxRigBytes: 200 });
    const body = JSON.stringify(block(0));
    const first = post('application/json', body);
    const second = post('application/json', JSON.stringify(block(1)));
    const third = await post('application/json', JSON.stringify(block(2)) + ' '.repeat(200));
    expect(third).toMatchObject({
      status: 429,
      headers: { 'retry-after': '1' },
      body: { type: 'urn:turnmark:problem:too-fast' },
    });
    expect(http.refuseEarly(rigId, 'application/json', 200)).toMatchObject({ status: 429 });
    expect(http.refuseEarly('rig-2', 'application/json', 200)).toBeUndefined();
    sink.commit();
    expect([await first, await second]).toMatchObject([{ status: 202 }, { status: 202 }]);
    expect(http.refuseEarly(rigId, 'application/json', 200)).toBeUndefined();
  });

  it('knows the limit of each type before the body is read', () => {
    const { http } = setUp();
    expect(bodyLimit('application/cbor')).toBe(1024 * 1024);
    expect(bodyLimit('text/csv; header=present')).toBe(64 * 1024 * 1024);
    expect(http.refuseEarly(rigId, 'text/csv', 64 * 1024 * 1024 + 1)).toMatchObject({ status: 413 });
    expect(http.refuseEarly(rigId, 'image/png', 1)).toMatchObject({ status: 415 });
  });
});

describe('POST of recordings', () => {
  it('opens a new stream for each CSV without a name, and cuts it', async () => {
    const { post, sink } = setUp();
    const rows = 65_536 + 10;
    expect(await post('text/csv', csv(rows))).toMatchObject({
      status: 202,
      body: { stream: 'made-1', seq: 1, accepted: rows, duplicates: 0 },
    });
    expect(await post('text/csv', csv(3))).toMatchObject({ body: { stream: 'made-2', seq: 0, accepted: 3 } });
    expect(
      sink.blocks.map(({ block: { stream, seq, length }, startIndex }) => [stream, seq, length, startIndex]),
    ).toEqual([
      ['made-1', 0, 65_536, 0],
      ['made-1', 1, 10, 65_536],
      ['made-2', 0, 3, 0],
    ]);
  });

  it('goes on in a named stream with the next number, and recognises a repeat where both are given', async () => {
    const { post } = setUp();
    const stream = { 'turnmark-stream': 'bench' };
    expect(await post('text/csv', csv(3), stream)).toMatchObject({ body: { stream: 'bench', seq: 0 } });
    expect(await post('text/csv', csv(3), stream)).toMatchObject({
      body: { seq: 1, accepted: 3, duplicates: 0 },
    });
    const both = { ...stream, 'turnmark-seq': '2' };
    expect(await post('text/csv', csv(3), both)).toMatchObject({
      body: { seq: 2, accepted: 3, duplicates: 0 },
    });
    expect(await post('text/csv', csv(3), both)).toMatchObject({
      body: { seq: 2, accepted: 0, duplicates: 3 },
    });
  });

  it('gives two requests at the same time different numbers', async () => {
    const { post, sink } = setUp();
    const stream = { 'turnmark-stream': 'bench' };
    const answers = await Promise.all([1, 2, 3].map(() => post('text/csv', csv(5), stream)));
    expect(answers.map(({ status }) => status)).toEqual([202, 202, 202]);
    expect(sink.blocks.map(({ block: { seq } }) => seq)).toEqual([0, 1, 2]);
  });

  it('takes codes and a rate', async () => {
    const { post, sink } = setUp();
    await post('text/csv', 't,A\n0,7\n', { 'turnmark-rate': '20000' }, true);
    expect(sink.blocks[0]!.block).toMatchObject({ rateHz: 20000, channels: [{ samples: Int32Array.of(7) }] });
  });

  it.each([
    ['turnmark-seq', '-1'],
    ['turnmark-seq', '4294967296'],
    ['turnmark-seq', 'x'],
    ['turnmark-rate', '0'],
    ['turnmark-rate', ''],
    ['turnmark-stream', ''],
    ['turnmark-stream', 'x'.repeat(65)],
  ])('refuses %s: %j', async (name, value) => {
    const { post, sink } = setUp();
    expect(await post('text/csv', csv(3), { [name]: value })).toMatchObject({ status: 422 });
    expect(sink.blocks).toHaveLength(0);
  });

  it('stores nothing of a recording that is uneven or has an unknown channel', async () => {
    const { post, sink } = setUp();
    expect(await post('text/csv', 't,A\n0,1\n1,1\n2.5,1\n3,1\n')).toMatchObject({
      status: 422,
      body: { type: 'urn:turnmark:problem:invalid', at: 'row 3' },
    });
    expect(await post('text/csv', 't,C\n0,1\n1,1\n')).toMatchObject({
      status: 422,
      body: { type: 'urn:turnmark:problem:invalid', pointer: '/samples/C' },
    });
    expect(sink.blocks).toHaveLength(0);
  });

  it('a SenML pack is a stream of its own', async () => {
    const { post, sink } = setUp();
    expect(await post('application/senml+json', senml)).toMatchObject({
      status: 202,
      body: { stream: 'made-1', seq: 0, accepted: 3, duplicates: 0 },
    });
    expect(sink.blocks[0]!.block.timeS).toBeCloseTo(1_700_000_000 - 0.002, 6);
    const cbor = Buffer.from('82a300614102010600a3006141020206fb3fb999999999999a', 'hex');
    expect(await post('application/senml+cbor', cbor)).toMatchObject({
      status: 202,
      body: { stream: 'made-2', accepted: 2 },
    });
  });

  it('an Idempotency-Key makes a repeat harmless for 24 h', async () => {
    const { post, sink, later } = setUp();
    const key = { 'idempotency-key': 'k1' };
    const first = { stream: 'made-1', seq: 0, accepted: 3, duplicates: 0 };
    const repeat = { stream: 'made-1', seq: 0, accepted: 0, duplicates: 3 };
    expect((await post('application/senml+json', senml, key)).body).toEqual(first);
    expect((await post('application/senml+json', senml, key)).body).toEqual(repeat);
    later(24 * 3600 * 1000 - 1);
    expect((await post('application/senml+json', senml, key)).body).toEqual(repeat);
    expect(await post('application/senml+json', [...senml, { n: 'A', t: 0.001, v: 4 }], key)).toMatchObject({
      status: 422,
    });
    later(1);
    expect((await post('application/senml+json', senml, key)).body).toMatchObject({
      stream: 'made-2',
      accepted: 3,
    });
    expect(sink.blocks).toHaveLength(2);
  });

  it('of two requests with one key at once, the second is the repeat', async () => {
    const { post, sink } = setUp();
    const key = { 'idempotency-key': 'k1' };
    const bodies = (await Promise.all([1, 2, 3].map(() => post('application/senml+json', senml, key)))).map(
      ({ body }) => body,
    );
    expect(bodies).toMatchObject([
      { accepted: 3 },
      { accepted: 0, duplicates: 3 },
      { accepted: 0, duplicates: 3 },
    ]);
    expect(sink.blocks).toHaveLength(1);
  });

  it('a key whose first request was cut off goes on in the same stream', async () => {
    const { post, sink } = setUp();
    const key = { 'idempotency-key': 'k1' };
    sink.fail('The disk is full.');
    expect(await post('application/senml+json', senml, key)).toMatchObject({ status: 503 });
    sink.fail(undefined);
    expect((await post('application/senml+json', senml, key)).body).toMatchObject({
      stream: 'made-1',
      accepted: 3,
    });
  });

  it('a key whose request was refused is free again', async () => {
    const { post } = setUp();
    const key = { 'idempotency-key': 'k1' };
    expect(await post('application/senml+json', [{ n: 'A', u: 'A', v: 1 }], key)).toMatchObject({
      status: 422,
    });
    expect(await post('application/senml+json', senml, key)).toMatchObject({ status: 202 });
  });
});
