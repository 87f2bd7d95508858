import { decode } from 'cbor-x';
import { describe, expect, it } from 'vitest';
import { encodeBlock, joinBlocks } from '@/simulator/wire';

const block = {
  stream: 'boot-1',
  seq: 4_294_967_295,
  rateHz: 20_000,
  timeS: 1.5,
  length: 3,
  channels: [{ name: 'A', samples: new Int16Array([1, -2, 300]) }],
};
const hex = (bytes: Uint8Array) => Buffer.from(bytes).toString('hex');

describe('wire', () => {
  it('writes int16 as RFC 8746 tag 77 and float32 as tag 85', () => {
    expect(hex(encodeBlock(block, 'cbor').bytes)).toContain('d84d460100feff2c01');
    const floats = { ...block, channels: [{ name: 'A', samples: new Float32Array([1.5, 2.5]) }] };
    expect(hex(encodeBlock(floats, 'cbor').bytes)).toContain('d855480000c03f00002040');
  });

  it('says what the block says', () => {
    const message = decode(encodeBlock(block, 'cbor').bytes) as Record<string, unknown>;
    expect(message).toEqual({
      stream: 'boot-1',
      seq: 4_294_967_295,
      rate: 20_000,
      time: 1.5,
      samples: { A: new Int16Array([1, -2, 300]) },
    });
    const json: unknown = JSON.parse(Buffer.from(encodeBlock(block, 'json').bytes).toString());
    expect(json).toMatchObject({ codes: true, samples: { A: [1, -2, 300] } });
  });

  it('joins blocks to a batch in either encoding', () => {
    for (const format of ['cbor', 'json'] as const) {
      const blocks = [1, 2, 3].map((seq) => encodeBlock({ ...block, seq }, format));
      const bytes = joinBlocks(blocks, format);
      const batch = (format === 'cbor' ? decode(bytes) : JSON.parse(Buffer.from(bytes).toString())) as {
        seq: number;
      }[];
      expect(batch.map(({ seq }) => seq)).toEqual([1, 2, 3]);
    }
  });
});
