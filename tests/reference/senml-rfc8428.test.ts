import { describe, expect, it } from 'vitest';
import { Encoder } from 'cbor-x';
import { absoluteTimeS, resolveSenml, senmlCborLabels } from '@/ingest/decoders/senml';
import type { SenmlRecord } from '@/ingest/decoders/senml';
import { decodeSenml } from '@/ingest/decoders/senml-recording';
import { senmlCborRecords, senmlJsonRecords } from '@/ingest/decoders/senml-records';
import type { RecordBatch } from '@/ingest/decoders/senml-records';
import fixture from '../fixtures/formats/rfc8428-examples.json';

type Resolved = { name: string; unit?: string; t: number; rel?: boolean; value: number | string | boolean };
type Example = { section: string; pack: SenmlRecord[]; resolved: Resolved[] };
const examples = fixture.examples as unknown as Example[];
const nowS = 1_700_000_000.25;
const dump = Buffer.from(fixture.cborOf512Second, 'hex');

function records(batches: Iterable<RecordBatch>): SenmlRecord[] {
  return [...batches].flatMap((batch) => {
    if (!batch.ok) throw new Error(batch.issue.detail);
    return batch.records;
  });
}

function cborOf(pack: SenmlRecord[]): Buffer {
  const labels = new Map([...senmlCborLabels].map(([number, label]) => [label as string, number]));
  const encoder = new Encoder({ useRecords: false, mapsAsObjects: false });
  return encoder.encode(
    pack.map(
      (record) =>
        new Map(
          Object.entries(record).map(([key, value]) => [
            labels.get(key),
            key === 'vd' ? Buffer.from(value as string, 'base64url') : value,
          ]),
        ),
    ),
  );
}

function expectResolved(read: SenmlRecord[], wanted: Resolved[]): void {
  const result = resolveSenml(read, nowS);
  if (!result.ok) throw new Error(result.issue.detail);
  expect(
    result.measurements.map(({ name, unit, value, timeS }) => ({
      name,
      unit,
      value: value instanceof Uint8Array ? Buffer.from(value).toString('base64url') : value,
      timeS,
    })),
  ).toEqual(
    wanted.map(({ name, unit, value, t, rel }) => ({ name, unit, value, timeS: rel ? nowS + t : t })),
  );
}

describe('RFC 8428 worked messages', () => {
  it.each(examples.map((example) => [example.section, example] as const))(
    '%s: JSON',
    (_, { pack, resolved }) => {
      const read = records(senmlJsonRecords(Buffer.from(JSON.stringify(pack))));
      expect(read).toEqual(pack);
      expectResolved(read, resolved);
    },
  );

  it.each(examples.map((example) => [example.section, example] as const))(
    '%s: CBOR',
    (_, { pack, resolved }) => {
      expectResolved(records(senmlCborRecords(cborOf(pack))), resolved);
    },
  );

  it.each(examples.map((example) => [example.section, example] as const))(
    '%s: no voltages of a rig, so refused with 422',
    (_, { pack }) => {
      const json = decodeSenml(Buffer.from(JSON.stringify(pack)), { format: 'json', nowS });
      const cbor = decodeSenml(cborOf(pack), { format: 'cbor', nowS });
      expect(json).toMatchObject({ ok: false, issue: { slug: 'invalid', status: 422 } });
      expect(cbor).toMatchObject({ ok: false, issue: { slug: 'invalid', status: 422 } });
    },
  );

  it('section 6: the CBOR dump is the second pack of 5.1.2', () => {
    expect(dump).toHaveLength(195);
    const read = records(senmlCborRecords(dump));
    expect(read).toHaveLength(7);
    expect(read[0]).toEqual({
      bn: 'urn:dev:ow:10e2073a0108006:',
      bt: 1276020076.001,
      bu: 'A',
      bver: 5,
      n: 'voltage',
      u: 'V',
      v: 120.1,
    });
    const example = examples.find(({ section }) => section === '5.1.2, second')!;
    expectResolved(read, example.resolved);
    const result = resolveSenml(read, nowS);
    expect(result.ok && result.measurements[0]).toMatchObject({
      timeS: 1276020071.001,
      value: 1.2,
      unit: 'A',
    });
    expect(decodeSenml(dump, { format: 'cbor', nowS })).toMatchObject({ ok: false, issue: { status: 422 } });
  });

  it('section 4.5.3: below 2^28 s relative, from there Unix time', () => {
    expect(absoluteTimeS(268_435_455, 1000)).toBe(268_436_455);
    expect(new Date(absoluteTimeS(268_435_456, 1000) * 1000).toISOString()).toBe('1978-07-04T21:24:16.000Z');
  });
});

describe('RFC 8428 rules', () => {
  const voltage = (fields: object): SenmlRecord[] => [
    { bn: 'rig:', ...fields, n: 'A', v: 1 } as SenmlRecord,
    { n: 'A', t: 0.1, v: 2 },
    { n: 'A', t: 0.2, v: 3 },
  ];
  const decode = (pack: unknown) => decodeSenml(Buffer.from(JSON.stringify(pack)), { format: 'json', nowS });

  it('a voltage, with or without its unit, is a recording', () => {
    for (const fields of [{}, { bu: 'V' }, { u: 'V' }, { bt: -3 }, { bver: 10 }, { future: 'ignored' }]) {
      expect(decode(voltage(fields))).toMatchObject({ ok: true, recording: { channels: ['A'], length: 3 } });
    }
  });
  it.each([
    ['a version above 10 (4.4)', { bver: 11 }],
    ['an unknown field that must be understood (4.4)', { future_: 1 }],
    ['a name outside the alphabet (4.5.1)', { bn: 'rig ' }],
    ['a name that starts with a sign (4.5.1)', { bn: '-rig' }],
    ['another unit', { u: 'A' }],
    ['a base unit', { bu: 'Cel' }],
    ['two values (4.2)', { vs: 'x' }],
    ['a field of the wrong type', { bt: '1' }],
  ])('refuses %s', (_, fields) => {
    expect(decode(voltage(fields))).toMatchObject({ ok: false, issue: { status: 422 } });
  });
  it('adds base values and base times (4.1)', () => {
    const result = decode([
      { bn: 'rig:', bt: 1e9, bv: 100, n: 'A', v: 1 },
      { n: 'A', t: 1, v: 2 },
      { bv: 200, bt: 1e9 + 2, n: 'A', v: 3 },
    ]);
    expect(result).toMatchObject({ ok: true, recording: { timeS: 1e9, rateHz: 1 } });
    expect(result.ok && Array.from(result.recording.pieces[0]![0]!)).toEqual([101, 102, 203]);
  });
  it('takes decimal fractions in CBOR (section 6: tag 4)', () => {
    // [{-2: "r:", 0: "A", 2: 4([-1, 15])}, {0: "A", 6: 1, 2: 2}]
    const hex = '82' + 'a32162723a00614102c482200f' + 'a3006141060102' + '02';
    const result = decodeSenml(Buffer.from(hex, 'hex'), { format: 'cbor', nowS });
    expect(result.ok && Array.from(result.recording.pieces[0]![0]!)).toEqual([1.5, 2]);
  });
});
