import { Encoder } from 'cbor-x';
import { describe, expect, it } from 'vitest';
import { decodeCbor } from './cbor';
import { decodeJson } from './json';
import type { BlockResult, MessageResult } from './result';

const encoder = new Encoder({ useRecords: false, tagUint8Array: false });
const cbor = (value: unknown): MessageResult => decodeCbor(encoder.encode(value));
const json = (value: unknown): MessageResult =>
  decodeJson(Buffer.from(typeof value === 'string' ? value : JSON.stringify(value)));
const formats = [
  ['CBOR', cbor],
  ['JSON', json],
] as const;

function only(result: MessageResult): BlockResult {
  if (!result.ok) throw new Error(result.issue.detail);
  expect(result.blocks).toHaveLength(1);
  return result.blocks[0]!;
}

const good = { stream: 'boot-7', seq: 41, rate: 20000, time: 1.5, samples: { A: [1, 2.5], B: [-3, 4] } };

describe.each(formats)('%s', (_, decode) => {
  it('reads a block: plain arrays are volts', () => {
    expect(only(decode(good))).toEqual({
      ok: true,
      block: {
        stream: 'boot-7',
        seq: 41,
        rateHz: 20000,
        timeS: 1.5,
        length: 2,
        channels: [
          { name: 'A', samples: Float64Array.of(1, 2.5) },
          { name: 'B', samples: Float64Array.of(-3, 4) },
        ],
      },
    });
  });

  it('`codes` makes plain arrays codes, wherever it stands', () => {
    const samples = { A: [0, -5, 2147483647] };
    for (const block of [
      { stream: 's', seq: 0, codes: true, samples },
      { samples, codes: true, stream: 's', seq: 0 },
    ]) {
      expect(only(decode(block))).toMatchObject({
        ok: true,
        block: { rateHz: undefined, channels: [{ samples: Int32Array.of(0, -5, 2147483647) }] },
      });
    }
    const volts = { A: [0, -5, 21474] };
    expect(only(decode({ stream: 's', seq: 0, codes: false, samples: volts }))).toMatchObject({
      ok: true,
      block: { channels: [{ samples: Float64Array.of(0, -5, 21474) }] },
    });
  });

  it.each([1_000_000.5, -1e30, 3e38, 1.7e308, 2147483647])('refuses %d V, and says which sample', (volts) => {
    expect(only(decode({ stream: 's', seq: 0, samples: { A: [1, 2], B: [1, volts] } }))).toMatchObject({
      ok: false,
      issue: {
        slug: 'invalid',
        status: 422,
        pointer: '/samples/B/1',
        detail: expect.stringContaining('beyond 1000000 V'),
      },
    });
  });

  it('takes a million volts either way', () => {
    const samples = { A: [-1_000_000, 1_000_000] };
    expect(only(decode({ stream: 's', seq: 0, samples })).ok).toBe(true);
  });

  it('ignores unknown keys', () => {
    expect(only(decode({ ...good, firmware: { name: 'x', parts: [1, [2, [3]]] } })).ok).toBe(true);
  });

  it.each([
    ['no stream', { ...good, stream: undefined }, '/stream'],
    ['an empty stream', { ...good, stream: '' }, '/stream'],
    ['a stream of 65 characters', { ...good, stream: 'x'.repeat(65) }, '/stream'],
    ['a stream that is a number', { ...good, stream: 5 }, '/stream'],
    ['a seq of 2^32', { ...good, seq: 2 ** 32 }, '/seq'],
    ['a negative seq', { ...good, seq: -1 }, '/seq'],
    ['half a seq', { ...good, seq: 1.5 }, '/seq'],
    ['a seq that is a text', { ...good, seq: '1' }, '/seq'],
    ['a rate below 1 Hz', { ...good, rate: 0.99 }, '/rate'],
    ['a rate above 1 MHz', { ...good, rate: 1_000_001 }, '/rate'],
    ['a rate that is null', { ...good, rate: null }, '/rate'],
    ['a time that is a text', { ...good, time: 'noon' }, '/time'],
    ['codes that are no boolean', { ...good, codes: 1 }, '/codes'],
    ['codes that are not whole', { ...good, codes: true }, '/samples/A/1'],
    ['codes beyond 32 bits', { ...good, codes: true, samples: { A: [1, 2 ** 31] } }, '/samples/A/1'],
    ['samples that are no map', { ...good, samples: [1, 2] }, '/samples'],
    ['no channel', { ...good, samples: {} }, '/samples'],
    ['a channel that is no array', { ...good, samples: { A: 5 } }, '/samples/A'],
    ['a channel without a name', { ...good, samples: { '': [1] } }, '/samples'],
    ['a channel name of 17 characters', { ...good, samples: { ['x'.repeat(17)]: [1] } }, '/samples'],
    ['channels of two lengths', { ...good, samples: { A: [1, 2], 'B/~': [1] } }, '/samples/B~1~0'],
    ['a sample that is a text', { ...good, samples: { A: [1, '2'] } }, '/samples/A/1'],
    ['a sample that is null', { ...good, samples: { A: [null] } }, '/samples/A/0'],
  ])('refuses %s', (_, block, pointer) => {
    // JSON.stringify drops undefined; CBOR would carry it as a value.
    const { stream, ...rest } = block as Record<string, unknown>;
    const result = only(decode(stream === undefined ? rest : block));
    expect(result).toMatchObject({ ok: false, issue: { slug: 'invalid', status: 422, pointer } });
  });

  it('refuses a block without samples or seq', () => {
    expect(only(decode({ stream: 's', seq: 0 }))).toMatchObject({
      issue: { pointer: '/samples' },
      stream: 's',
      seq: 0,
    });
    expect(only(decode({ stream: 's', samples: { A: [1] } }))).toMatchObject({
      issue: { pointer: '/seq' },
      stream: 's',
    });
  });

  it('counts characters, not bytes or halves', () => {
    const stream = '𝛺'.repeat(64);
    expect(only(decode({ ...good, stream, samples: { ['µ'.repeat(16)]: [1] } }))).toMatchObject({
      ok: true,
      block: { stream, channels: [{ name: 'µ'.repeat(16) }] },
    });
    expect(only(decode({ ...good, stream: '𝛺'.repeat(65) })).ok).toBe(false);
  });

  it('holds 65,536 samples and 8 channels, and no more', () => {
    const samples = (n: number): number[] => new Array<number>(n).fill(0);
    expect(only(decode({ ...good, samples: { A: samples(65_536) } }))).toMatchObject({ ok: true });
    expect(only(decode({ ...good, samples: { A: samples(65_537) } }))).toMatchObject({
      issue: { slug: 'too-large', status: 413 },
      stream: 'boot-7',
      seq: 41,
    });
    const channels = (n: number): object => Object.fromEntries(samples(n).map((_, i) => ['c' + i, [1]]));
    expect(only(decode({ ...good, samples: channels(8) }))).toMatchObject({ ok: true });
    expect(only(decode({ ...good, samples: channels(9) }))).toMatchObject({ issue: { slug: 'too-large' } });
  });

  it('a bad block in a batch takes nothing from the good ones beside it', () => {
    const bad = [
      { ...good, seq: 1, samples: { A: ['x'] } },
      { ...good, seq: 2, rate: -1 },
      { seq: 3 },
      'no block',
      7,
      null,
      [],
      { ...good, seq: 4, samples: { A: [1], B: [1, 2] } },
      { ...good, seq: 5, codes: 'yes', extra: [[[[1]]]] },
    ];
    const batch = bad.flatMap((block, i) => [{ ...good, seq: 100 + i }, block]);
    const result = decode([...batch, good]);
    if (!result.ok) throw new Error(result.issue.detail);
    expect(result.batch).toBe(true);
    expect(result.blocks).toHaveLength(2 * bad.length + 1);
    result.blocks.forEach((block, i) => {
      expect(block.ok).toBe(i % 2 === 0);
      if (block.ok) expect(block.block.seq).toBe(i === 2 * bad.length ? 41 : 100 + i / 2);
      else expect(block.issue.pointer).toMatch(new RegExp(`^/${i}(/|$)`));
    });
    expect(result.blocks[1]).toMatchObject({ stream: 'boot-7', seq: 1 });
    expect(result.blocks[5]).toMatchObject({ stream: undefined, seq: 3 });
  });

  it('does not answer one by one for a heap of things that are no blocks', () => {
    const few = decode([...Array<number>(200).fill(7), good]);
    expect(few.ok && few.blocks.filter((block) => block.ok)).toHaveLength(1);
    const heap = decode([good, ...Array<number>(100_000).fill(7)]);
    expect(heap).toMatchObject({ ok: false, issue: { slug: 'invalid', pointer: '/257' } });
    const named = decode(Array.from({ length: 1000 }, (_, seq) => ({ ...good, seq, samples: {} })));
    expect(named.ok && named.blocks).toHaveLength(1000);
  });

  it('refuses what is neither a block nor a batch, and an empty batch', () => {
    for (const value of [5, 'text', true, []]) {
      expect(decode(typeof value === 'string' ? JSON.stringify(value) : value)).toMatchObject({
        ok: false,
        issue: { slug: 'invalid' },
      });
    }
  });
});

describe('CBOR only', () => {
  const hex = (text: string): MessageResult => decodeCbor(Buffer.from(text.replaceAll(' ', ''), 'hex'));
  const head = '66 73747265616d 61 73' + '63 736571 01';
  const samples = '67 73616d706c6573 a1 61 41 81 01';

  it('says which block it was even where the fault comes before the name', () => {
    expect(hex(`a3 67 73616d706c6573 a1 61 41 81 61 78 ${head}`)).toMatchObject({
      ok: true,
      blocks: [{ ok: false, stream: 's', seq: 1, issue: { pointer: '/samples/A/0' } }],
    });
  });

  it.each([
    ['a known key twice', `a4 ${head} 63 736571 02 ${samples}`],
    ['an unknown key twice', `a5 ${head} ${samples} 61 78 00 61 78 01`],
    ['an unknown number key twice, in two encodings', `a5 ${head} ${samples} 05 00 18 05 01`],
    ['a channel twice', `a3 ${head} 67 73616d706c6573 a2 61 41 81 01 61 41 81 02`],
    ['a tag before a field', `a4 ${head} ${samples} 64 74696d65 c1 01`],
    ['a tag before the block', `d9d9f7 a3 ${head} ${samples}`],
  ])('refuses %s', (_, text) => {
    const result = hex(text);
    const issue = result.ok ? (result.blocks[0] as { issue?: unknown }).issue : result.issue;
    expect(issue).toMatchObject({ slug: 'invalid', status: 422 });
  });

  it('reads maps, arrays and texts of indefinite length', () => {
    const text = `bf ${head} 67 73616d706c6573 bf 7f 61 41 61 42 ff 9f 01 f9 3e00 ff ff ff`;
    expect(only(hex(text))).toMatchObject({
      ok: true,
      block: { stream: 's', seq: 1, channels: [{ name: 'AB', samples: Float64Array.of(1, 1.5) }] },
    });
    expect(hex(`9f a3 ${head} ${samples} ff`)).toMatchObject({
      ok: true,
      batch: true,
      blocks: [{ ok: true }],
    });
  });

  it.each([
    ['trailing bytes', `a3 ${head} ${samples} 00`],
    ['an end within a block', `a3 ${head} 67 73616d706c6573 a1`],
    ['no bytes at all', ''],
    ['a hostile array (K52)', '9f'],
    ['a hostile array of 20 million (K52)', '9a01312d00'],
    ['a hostile array of 2^32 (K52)', '9b00000000fffffffe'],
    ['a hostile map', 'bbffffffffffffffff'],
    ['a hostile typed array', `a3 ${head} 67 73616d706c6573 a1 61 41 d84d 5b 00000000fffffffe 00`],
    ['a hostile plain array', `a3 ${head} 67 73616d706c6573 a1 61 41 9b 00000000fffffffe 00`],
    ['a hostile text', `a1 7b 00000000fffffffe 00`],
    ['100,000 nested arrays', '81'.repeat(100_000)],
  ])('cannot read %s', (_, text) => {
    expect(hex(text)).toMatchObject({
      ok: false,
      issue: { slug: 'unreadable', status: 400, at: expect.stringMatching(/^byte \d+$/) },
    });
  });

  it('a nested horror in one block leaves its neighbours whole', () => {
    const horror = `a1 61 78 ${'81'.repeat(5000)} 00`;
    const result = hex(`83 a3 ${head} ${samples} ${horror} a3 ${head} ${samples}`);
    expect(result).toMatchObject({ ok: true, blocks: [{ ok: true }, { ok: false }, { ok: true }] });
  });

  it('a key that is nested beyond reason is one block’s fault', () => {
    const strange = `a1 ${'81'.repeat(20)} 00 00`;
    expect(hex(`82 ${strange} a3 ${head} ${samples}`)).toMatchObject({
      ok: true,
      blocks: [{ ok: false }, { ok: true }],
    });
  });

  it('gives views where the message allows and copies where not, and never more than the message holds', () => {
    const big = new Int16Array(512).map((_, i) => i - 256);
    const message = encoder.encode({ stream: 's', seq: 0, samples: { A: big, B: big } });
    for (let shift = 0; shift < 4; shift++) {
      const memory = new Uint8Array(message.length + shift);
      memory.set(message, shift);
      const result = only(decodeCbor(memory.subarray(shift)));
      expect(result.ok && result.block.channels.map(({ samples }) => samples)).toEqual([big, big]);
    }
  });

  it('says that a message is too large without reading it', () => {
    expect(decodeCbor(new Uint8Array(1024 * 1024 + 1))).toMatchObject({
      ok: false,
      issue: { slug: 'too-large', status: 413 },
    });
  });
});

describe('CBOR only', () => {
  it.each([
    ['float32', Float32Array.of(0, 1_000_000, 1e30), /^A sample of 1\.00e\+30 V is beyond 1000000 V/],
    ['float64', Float64Array.of(0, -1_000_000, -1.7e308), /^A sample of -1\.70e\+308 V is beyond 1000000 V/],
    ['float32', Float32Array.of(0, 1, NaN), /^A sample is NaN or infinite\.$/],
    ['float64', Float64Array.of(0, 1, -Infinity), /^A sample is NaN or infinite\.$/],
  ])('refuses a %s that is no voltage', (_, samples, detail) => {
    expect(only(cbor({ stream: 's', seq: 0, samples: { A: samples } }))).toMatchObject({
      ok: false,
      issue: { slug: 'invalid', pointer: '/samples/A/2', detail: expect.stringMatching(detail) },
    });
  });
});

describe('JSON only', () => {
  it.each([
    ['{"stream":"s",}', 'line 1, column 15'],
    ['{"stream":\n"s"\n "seq"}', 'line 3, column 2'],
    ['[{"seq":1}', 'line 1, column 11'],
    ['{"seq":01}', 'line 1, column 9'],
    ['{"seq":1}x', 'line 1, column 10'],
    ['{"samples":{"A":[1,NaN]}}', 'line 1, column 20'],
    ['{"stream":"a\tb"}', 'line 1, column 11'],
    ['', 'line 1, column 1'],
  ])('says where %j breaks', (text, at) => {
    expect(json(text)).toMatchObject({ ok: false, issue: { slug: 'unreadable', status: 400, at } });
  });

  it('says where bytes are no UTF-8', () => {
    const bytes = Buffer.concat([Buffer.from('{"stream":"'), Buffer.from([0xc3, 0x28]), Buffer.from('"}')]);
    expect(decodeJson(bytes)).toMatchObject({ ok: false, issue: { slug: 'unreadable', at: 'byte 12' } });
  });

  it('refuses a key that appears twice, in its block only', () => {
    const block = JSON.stringify(good);
    const twice = block.replace('"seq":41', '"seq":41,"seq":42');
    expect(only(json(twice))).toMatchObject({ ok: false, issue: { slug: 'invalid' } });
    expect(json(`[${block},${twice},${block}]`)).toMatchObject({
      ok: true,
      blocks: [{ ok: true }, { ok: false, issue: { pointer: '/1' } }, { ok: true }],
    });
    const channelTwice = '{"stream":"s","seq":0,"samples":{"A":[1],"A":[2]}}';
    expect(only(json(channelTwice))).toMatchObject({ ok: false, issue: { slug: 'invalid' } });
  });

  it('is not taken in by quotes and colons within texts', () => {
    expect(only(json({ ...good, note: 'a":{"b":1}\\', '"k":': ['","', ':'] }))).toMatchObject({ ok: true });
  });

  it('refuses a number that is too large for a double', () => {
    expect(only(json('{"stream":"s","seq":0,"samples":{"A":[1e999]}}'))).toMatchObject({
      issue: { slug: 'invalid', pointer: '/samples/A/0' },
    });
  });

  it('takes a channel called __proto__ like any other', () => {
    expect(only(json('{"stream":"s","seq":0,"samples":{"__proto__":[1]}}'))).toMatchObject({
      ok: true,
      block: { channels: [{ name: '__proto__' }] },
    });
  });

  it('survives deep nesting', () => {
    const deep = '['.repeat(300_000) + ']'.repeat(300_000);
    expect(json(deep)).toMatchObject({ ok: true, blocks: [{ ok: false }] });
  });
});
