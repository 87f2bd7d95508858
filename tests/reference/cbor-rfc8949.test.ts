import { describe, expect, it } from 'vitest';
import { CborReader } from '@/ingest/decoders/cbor-reader';
import { CborFault, CborSimple, CborTag } from '@/ingest/decoders/cbor-values';
import type { CborValue } from '@/ingest/decoders/cbor-values';
import table from '../fixtures/formats/rfc8949-appendix-a.json';

type Vector = { hex: string; json?: unknown; diagnostic?: string; refused?: string };
const vectors = table.vectors as Vector[];

function read(hex: string): CborValue {
  const reader = new CborReader(Buffer.from(hex, 'hex'));
  const value = reader.value();
  expect(reader.pos).toBe(reader.end);
  return value;
}

/** Diagnostic notation, RFC 8949 section 8, as far as the vectors use it. */
function diagnostic(value: CborValue): string {
  if (value instanceof Uint8Array) return `h'${Buffer.from(value).toString('hex')}'`;
  if (value instanceof CborTag) return `${value.tag}(${diagnostic(value.value)})`;
  if (value instanceof CborSimple) return `simple(${value.code})`;
  if (value instanceof Map)
    return `{${[...value].map(([k, v]) => `${diagnostic(k)}: ${diagnostic(v)}`).join(', ')}}`;
  if (Array.isArray(value)) return `[${value.map(diagnostic).join(', ')}]`;
  return typeof value === 'string' ? JSON.stringify(value) : String(value);
}

function plain(value: CborValue): unknown {
  if (value instanceof Map) return Object.fromEntries([...value].map(([k, v]) => [k, plain(v)]));
  return Array.isArray(value) ? value.map(plain) : value;
}

describe('RFC 8949 appendix A', () => {
  it('has all 82 vectors', () => {
    expect(vectors).toHaveLength(82);
    expect(new Set(vectors.map((vector) => vector.hex)).size).toBe(82);
  });

  it.each(vectors.map((vector) => [vector.hex, vector] as const))('%s', (hex, vector) => {
    if (vector.refused !== undefined) expect(caught(() => read(hex))).toMatchObject({ kind: 'unreadable' });
    else if (vector.diagnostic !== undefined) expect(diagnostic(read(hex))).toBe(vector.diagnostic);
    else expect(plain(read(hex))).toEqual(vector.json);
  });

  it.each(vectors.filter((vector) => !vector.refused).map((vector) => vector.hex))(
    '%s: skipped whole, and cut anywhere it is unreadable',
    (hex) => {
      const bytes = Buffer.from(hex, 'hex');
      const reader = new CborReader(bytes);
      reader.skip();
      expect(reader.pos).toBe(bytes.length);
      for (let length = 0; length < bytes.length; length++) {
        for (const act of ['skip', 'value'] as const) {
          const fault = caught(() => new CborReader(bytes.subarray(0, length))[act]());
          expect(fault).toBeInstanceOf(CborFault);
          expect((fault as CborFault).kind).toBe('unreadable');
        }
      }
    },
  );
});

describe('RFC 8949 appendix F: not well-formed', () => {
  // Subkinds 1 to 5 of the appendix: too little data, reserved information, bad chunks, stray breaks.
  const bad =
    '18 19 1a 1b 1901 1a0102 1b01020304050607 38 58 78 98 9a01ff00 b8 d8 f8 f900 fa0000 fb000000 41 61 5affffffff00 ' +
    '5bffffffffffffffff010203 7affffffff00 7b7fffffffffffffff010203 81 818181818181818181 8200 a1 a20102 a100 a2000000 c0 ' +
    '5f4100 7f6100 9f 9f0102 bf bf01020102 819f 9f8000 9f9f9f9f9fffffffff 9f819f819f9fffffff 1c 1d 1e 3c 3d 3e 5c 5d 5e ' +
    '7c 7d 7e 9c 9d 9e bc bd be dc dd de fc fd fe f800 f801 f818ff00 f81f 5f00ff 5f21ff 5f6100ff 5f80ff 5fa0ff 5fc000ff ' +
    '5fe0ff 7f4100ff 5f5f4100ffff 7f7f6100ffff ff 81ff 8200ff a1ff a1ff00 a100ff a20000ff 9f81ff 9f829f819f9fffffffff ' +
    'bf00ff bf000000ff 1f 3f df';
  it.each(bad.split(' '))('%s', (hex) => {
    for (const act of ['skip', 'value'] as const) {
      const reader = new CborReader(Buffer.from(hex, 'hex'));
      const fault = caught(() => {
        reader[act]();
        if (reader.pos !== reader.end) throw reader.unreadable('trailing bytes');
      });
      expect(fault).toBeInstanceOf(CborFault);
      expect((fault as CborFault).kind).toBe('unreadable');
    }
  });
});

describe('valid but refused', () => {
  it.each(['a2010101 02'.replace(' ', ''), 'a20100180100', 'a261610061610 1'.replace(' ', '')])(
    'duplicate keys: %s',
    (hex) => {
      const fault = caught(() => new CborReader(Buffer.from(hex, 'hex')).value());
      expect(fault).toMatchObject({ kind: 'invalid' });
    },
  );
  it('a text that is not UTF-8', () => {
    expect(caught(() => new CborReader(Buffer.from('62c328', 'hex')).value())).toMatchObject({
      kind: 'invalid',
    });
  });
});

function caught(run: () => unknown): unknown {
  try {
    run();
    return undefined;
  } catch (fault) {
    return fault;
  }
}
