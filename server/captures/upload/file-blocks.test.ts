import { Encoder, Tag } from 'cbor-x';
import { describe, expect, it } from 'vitest';
import { blockLimits } from '@/ingest/block';
import { cborFileBlocks, jsonFileBlocks } from './file-blocks';
import type { FileBlock } from './file-blocks';

const encoder = new Encoder({ useRecords: false, variableMapSize: true });
const text = (json: string) => new TextEncoder().encode(json);
const block = (seq: number, samples: unknown = [1, 2, 3]) => ({
  stream: 's',
  seq,
  rate: 10,
  samples: { A: samples },
});
const floats = (length: number) => new Tag(Buffer.alloc(4 * length), 85);

const seen = (blocks: Iterable<FileBlock>) =>
  [...blocks].map(({ result, message }) => [message, result.ok ? result.block.seq : result.issue.slug]);

describe('a CBOR file', () => {
  it('may be one batch far larger than a message', () => {
    const batch = Array.from({ length: 40 }, (_, seq) => block(seq, floats(10_000)));
    const bytes = encoder.encode(batch);
    expect(bytes.byteLength).toBeGreaterThan(blockLimits.maxMessageBytes);
    expect(seen(cborFileBlocks(bytes))).toEqual(batch.map(({ seq }) => [1, seq]));
  });

  it('may be a sequence of batches and blocks, of indefinite length too', () => {
    const bytes = Buffer.concat([
      encoder.encode([block(0), block(1)]),
      encoder.encode(block(2)),
      Buffer.of(0x9f),
      encoder.encode(block(3)),
      Buffer.of(0xff),
    ]);
    expect(seen(cborFileBlocks(bytes))).toEqual([
      [1, 0],
      [1, 1],
      [2, 2],
      [3, 3],
    ]);
  });

  it.each([
    ['an empty batch', Buffer.of(0x80), 'invalid'],
    ['an empty batch of indefinite length', Buffer.of(0x9f, 0xff), 'invalid'],
    ['a batch in a batch', encoder.encode([[block(0)]]), 'invalid'],
    ['a batch that ends early', encoder.encode([block(0), block(1)]).subarray(0, 3), 'unreadable'],
    ['a count beyond the file', Buffer.of(0x9a, 0xff, 0xff, 0xff, 0xff), 'unreadable'],
    ['a number', Buffer.of(0x01), 'invalid'],
  ])('may not hold %s', (_, bytes, slug) => {
    expect(seen(cborFileBlocks(bytes))).toEqual([[1, slug]]);
  });
});

describe('a JSON file', () => {
  it('may be one batch over several lines', () => {
    const bytes = text(`\ufeff ${JSON.stringify([block(0), { ...block(1), note: 'a "]} \\' }], null, 2)}\n`);
    expect(seen(jsonFileBlocks(bytes))).toEqual([
      [1, 0],
      [1, 1],
    ]);
  });

  it('may be one batch far larger than a message', () => {
    const long = Array.from({ length: 20_000 }, (_, i) => i / 7);
    const batch = Array.from({ length: 5 }, (_, seq) => block(seq, long));
    const bytes = text(JSON.stringify(batch));
    expect(bytes.byteLength).toBeGreaterThan(blockLimits.maxMessageBytes);
    expect(seen(jsonFileBlocks(bytes))).toEqual(batch.map(({ seq }) => [1, seq]));
  });

  it('may be a line for each batch or block', () => {
    const lines = [[block(0), block(1)], block(2), [block(3)]].map((line) => JSON.stringify(line));
    expect(seen(jsonFileBlocks(text(`\n${lines.join('\r\n\n')}\n`)))).toEqual([
      [1, 0],
      [1, 1],
      [2, 2],
      [3, 3],
    ]);
  });

  it.each([
    ['an empty batch', '[ ]', 'invalid'],
    ['a batch in a batch', '[[{}]]', 'invalid'],
    ['a batch that never ends', `[${JSON.stringify(block(0))}`, 'unreadable'],
    ['a comma too many', `[${JSON.stringify(block(0))},]`, 'unreadable'],
    ['a missing comma', `[${JSON.stringify(block(0))} {}]`, 'unreadable'],
    ['a stray end', ']', 'unreadable'],
    ['a text that never ends', '"abc', 'unreadable'],
    ['a number', '17', 'invalid'],
  ])('may not hold %s', (_, json, slug) => {
    expect(seen(jsonFileBlocks(text(json))).at(-1)?.[1]).toBe(slug);
  });

  it('is not searched for the end of a block further than a block may reach', () => {
    const bytes = new Uint8Array(17 * 1024 * 1024).fill(0x20);
    bytes[0] = 0x7b;
    expect(seen(jsonFileBlocks(bytes))).toEqual([[1, 'too-large']]);
  });
});
