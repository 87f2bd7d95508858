import { describe, expect, it } from 'vitest';
import { decodeSenml } from './senml-recording';

const nowS = 1_700_000_000;
const json = (pack: unknown) =>
  decodeSenml(Buffer.from(typeof pack === 'string' ? pack : JSON.stringify(pack)), { format: 'json', nowS });

describe('SenML as a recording', () => {
  it('reads channels that agree, however they are interleaved', () => {
    const pack = [
      { bn: 'urn:dev:x:', bt: 1e9, bu: 'V', n: 'A', v: 1 },
      { n: 'A', t: 0.002, v: 3 },
      { n: 'B', t: 0.002, v: -3 },
      { n: 'B', v: -1 },
      { n: 'A', t: 0.001, v: 2 },
      { n: 'B', t: 0.001, v: -2 },
    ];
    const result = json(pack);
    expect(result).toMatchObject({ ok: true, recording: { timeS: 1e9, channels: ['A', 'B'], length: 3 } });
    expect(result.ok && result.recording.pieces).toEqual([
      [Float64Array.of(1, 2, 3), Float64Array.of(-1, -2, -3)],
    ]);
    expect(result.ok && result.recording.rateHz).toBeCloseTo(1000, 6);
  });

  it('keeps fast steps apart even beside today’s time', () => {
    const pack = Array.from({ length: 200 }, (_, i) => ({ n: 'A', t: i * 1e-6, v: i }));
    Object.assign(pack[0]!, { bn: 'r:', bt: 1.7e9 });
    const result = json(pack);
    expect(result.ok && result.recording.rateHz).toBeCloseTo(1e6, 0);
  });

  it('relative times refer to now', () => {
    const result = json([
      { bn: 'r:', n: 'A', t: -2, v: 1 },
      { n: 'A', t: -1, v: 2 },
    ]);
    expect(result).toMatchObject({ ok: true, recording: { timeS: nowS - 2 } });
  });

  const even = (fields: object[]): object[] => [
    { bn: 'r:', n: 'A', v: 0 },
    { n: 'A', t: 1, v: 0 },
    { n: 'A', t: 2, v: 0 },
    ...fields,
  ];
  it.each([
    ['one sample', [{ bn: 'r:', n: 'A', v: 0 }]],
    ['no record', []],
    ['only base fields', [{ bn: 'r:' }]],
    ['uneven steps', even([{ n: 'A', t: 3.05, v: 0 }])],
    ['the same time twice', even([{ n: 'A', t: 2, v: 0 }])],
    [
      'another length',
      even([
        { n: 'B', v: 0 },
        { n: 'B', t: 1, v: 0 },
      ]),
    ],
    ['another start', even([0.5, 1.5, 2.5].map((t) => ({ n: 'B', t, v: 0 })))],
    ['another rate', even([0, 2, 4].map((t) => ({ n: 'B', t, v: 0 })))],
    ['a rate below 1 Hz', [0, 2].map((t) => ({ n: 'A', t, v: 0 }))],
    [
      'a name missing',
      [
        { bn: 'r', v: 1 },
        { t: 1, v: 2 },
      ],
    ],
    ['one channel of two devices', even([{ bn: 'q:', n: 'A', t: 3, v: 0 }])],
    ['a sum only', even([{ n: 'A', t: 3, s: 1 }])],
    ['a text', even([{ n: 'A', t: 3, vs: '1' }])],
    ['a record without a value', even([{ n: 'A', t: 3 }])],
    ['a name of 17 characters', even([{ n: 'x'.repeat(17), t: 3, v: 0 }])],
    ['more than a million volts', even([{ n: 'A', t: 3, bv: 999_999, v: 1.5 }])],
    ['values that overflow', even([{ n: 'A', t: 3, bv: 1e308, v: 1e308 }])],
    ['a record that is no object', even([[]])],
  ])('refuses %s', (_, pack) => {
    expect(json(pack)).toMatchObject({ ok: false, issue: { status: 422, slug: 'invalid' } });
  });

  it('takes steps within 1 %', () => {
    expect(json(even([{ n: 'A', t: 2.992, v: 0 }])).ok).toBe(true);
    expect(json(even([{ n: 'A', t: 2.9, v: 0 }])).ok).toBe(false);
  });

  it('refuses a ninth channel as too large', () => {
    expect(json(Array.from({ length: 9 }, (_, i) => ({ n: 'c' + i, v: 0 })))).toMatchObject({
      issue: { slug: 'too-large', status: 413 },
    });
  });

  it.each([
    ['', 'byte 0'],
    ['{}', 'byte 0'],
    ['[', 'byte 1'],
    ['[{"n":"A","v":1}', 'byte 16'],
    ['[{"n":"A","v":1},]', 'byte 17'],
    ['[{"n":"A","v":1}] x', 'byte 18'],
    ['[{"n":"A" "v":1}]', 'byte 10'],
    ['[{"n":"A","v":1]]', 'byte 15'],
  ])('says where %j breaks', (text, at) => {
    expect(json(text)).toMatchObject({ ok: false, issue: { slug: 'unreadable', status: 400, at } });
  });

  it('refuses a key that appears twice', () => {
    expect(json('[{"n":"A","v":1,"v":2},{"n":"A","t":1,"v":1}]')).toMatchObject({
      issue: { slug: 'invalid', pointer: '/0' },
    });
  });

  it('reads a long pack across its inner cuts, and finds a fault beyond them', () => {
    const rows = 100_000;
    const records = Array.from({ length: rows }, (_, i) => `{"n":"A","t":${i / 1000},"v":${i}}`);
    const result = json(`[${records.join(',\n')}]`);
    expect(result.ok && result.recording.pieces.map((piece) => piece[0]!.length)).toEqual([65_536, 34_464]);
    expect(result.ok && result.recording.pieces[1]![0]![0]).toBe(65_536);
    records[90_000] = '{"n":"A","t":90,"v":"x"}';
    expect(json(`[${records.join(',')}]`)).toMatchObject({ ok: false, issue: { pointer: '/90000/v' } });
    const text = `[${records.slice(0, 50_000).join(',')},,${records[0]}]`;
    expect(json(text)).toMatchObject({
      ok: false,
      issue: { slug: 'unreadable', at: `byte ${text.indexOf(',,') + 1}` },
    });
  });

  it('does not build what is nested or long beyond reason', () => {
    expect(json('['.repeat(1_000_000))).toMatchObject({ ok: false, issue: { slug: 'unreadable' } });
    expect(json(`[{"n":"A","v":1,"x":[${'0,'.repeat(1_000_000)}0]}]`)).toMatchObject({
      ok: false,
      issue: { slug: 'unreadable' },
    });
    const cbor = decodeSenml(
      Buffer.concat([Buffer.from('81a16178', 'hex'), Buffer.alloc(1_000_000, 0x81), Buffer.of(0)]),
      { format: 'cbor', nowS },
    );
    expect(cbor).toMatchObject({ ok: false, issue: { slug: 'unreadable' } });
  });
});
