import { describe, expect, it } from 'vitest';
import { decodeCbor } from '@/ingest/decoders/cbor';
import type { SampleArray } from '@/signal/model';

/** {"stream": "s", "seq": 0, "samples": {"A": <array>}}, at four offsets, so that every alignment is met. */
function message(arrayHex: string, shift: number): Buffer {
  const stream = (0x61 + shift).toString(16) + '73'.repeat(shift + 1);
  const hex = 'a3' + '6673747265616d' + stream + '63736571' + '00' + '6773616d706c6573' + 'a16141' + arrayHex;
  return Buffer.from(hex, 'hex');
}

function samplesOf(arrayHex: string, shift = 0): SampleArray {
  const result = decodeCbor(message(arrayHex, shift));
  if (!result.ok) throw new Error(result.issue.detail);
  const [block] = result.blocks;
  if (!block?.ok) throw new Error(block?.issue.detail);
  return block.block.channels[0]!.samples;
}

describe('RFC 8746 typed arrays', () => {
  const vectors: [string, number, string, SampleArray][] = [
    ['uint8', 64, '43010280', Uint8Array.of(1, 2, 128)],
    ['uint16 big endian', 65, '440102fffe', Uint16Array.of(258, 65534)],
    ['uint16 little endian', 69, '440102fffe', Uint16Array.of(513, 65279)],
    ['uint32 big endian', 66, '480000000180000000', Uint32Array.of(1, 2147483648)],
    ['uint32 little endian', 70, '480100000000000080', Uint32Array.of(1, 2147483648)],
    ['sint16 big endian', 73, '460001fffe012c', Int16Array.of(1, -2, 300)],
    ['sint16 little endian (K48)', 77, '460100feff2c01', Int16Array.of(1, -2, 300)],
    ['sint32 big endian', 74, '4800000001fffffffe', Int32Array.of(1, -2)],
    ['sint32 little endian', 78, '4801000000feffffff', Int32Array.of(1, -2)],
    ['float32 big endian', 81, '483fc0000040200000', Float32Array.of(1.5, 2.5)],
    ['float32 little endian (K49)', 85, '480000c03f00002040', Float32Array.of(1.5, 2.5)],
    ['float64 big endian', 82, '483ff199999999999a', Float64Array.of(1.1)],
    ['float64 little endian', 86, '489a9999999999f13f', Float64Array.of(1.1)],
  ];
  it.each(vectors)('%s, at every alignment', (_, tag, content, wanted) => {
    for (let shift = 0; shift < 8; shift++) {
      const samples = samplesOf('d8' + tag.toString(16) + content, shift);
      expect(samples).toEqual(wanted);
      expect(samples.constructor).toBe(wanted.constructor);
    }
  });

  it('takes a byte string in chunks', () => {
    expect(samplesOf('d84d' + '5f' + '430100fe' + '41ff' + 'ff')).toEqual(Int16Array.of(1, -2));
  });

  it.each([40, 67, 68, 71, 72, 75, 76, 79, 80, 83, 84, 87, 0, 1, 24])('refuses tag %i', (tag) => {
    const head = tag < 24 ? (0xc0 + tag).toString(16) : 'd8' + tag.toString(16).padStart(2, '0');
    const result = decodeCbor(message(head + '500102030405060708' + '0102030405060708', 0));
    expect(result).toMatchObject({
      ok: true,
      blocks: [
        { ok: false, issue: { slug: 'invalid', status: 422, pointer: '/samples/A' }, stream: 's', seq: 0 },
      ],
    });
  });

  it('refuses a length that is no whole number of elements', () => {
    const result = decodeCbor(message('d84d' + '43010203', 0));
    expect(result).toMatchObject({ ok: true, blocks: [{ ok: false, issue: { status: 422 } }] });
  });

  it.each([
    ['NaN in float32', 'd855480000c03f0000c07f'],
    ['infinity in float32', 'd855480000c03f0000807f'],
    ['infinity in float64', 'd85648000000000000f07f'],
    ['NaN in float64, big endian', 'd852487ff8000000000000'],
    ['NaN in a plain array', '82f93c00f97e00'],
    ['infinity in a plain array', '81f97c00'],
  ])('refuses %s', (_, arrayHex) => {
    const result = decodeCbor(message(arrayHex, 0));
    expect(result).toMatchObject({
      ok: true,
      blocks: [
        { ok: false, issue: { slug: 'invalid', pointer: expect.stringMatching(/^\/samples\/A\/[01]$/) } },
      ],
    });
  });
});
