/** The records of a SenML pack, in JSON (RFC 8428 section 5) or CBOR (section 6), a few hundred at a time. */
import type { IngestIssue } from '../block';
import { CborReader, indefinite } from './cbor-reader';
import { CborFault, CborTag } from './cbor-values';
import type { CborValue } from './cbor-values';
import { countKeysInText, countKeysInValue, elementsOfArray, textOf, whereJsonBreaks } from './json-text';
import { invalid, quoted, unreadable } from './result';
import { senmlCborLabels, senmlFields } from './senml';
import type { SenmlKind, SenmlRecord } from './senml';

export type RecordBatch = { ok: true; records: SenmlRecord[] } | { ok: false; issue: IngestIssue };

const batchBytes = 64 * 1024;
const batchRecords = 512;
/** One record; memory for values grows by more than their bytes, so it is bounded on its own. */
const maxRecordBytes = 256 * 1024;
const maxDepth = 8;

/** Reads a pack in JSON. The last batch is the first that is not ok. */
export function* senmlJsonRecords(bytes: Uint8Array): Generator<RecordBatch, void> {
  let number = 0;
  for (const part of packParts(bytes)) {
    if (typeof part === 'string')
      return yield { ok: false, issue: unreadable('The body is not a JSON array.', part) };
    const read = textOf(bytes.subarray(part.start, part.end));
    if (!read.ok) {
      const at = Number(/\d+/.exec(read.issue.at ?? '')?.[0] ?? 0);
      return yield { ok: false, issue: { ...read.issue, at: `byte ${part.start + at}` } };
    }
    const text = `[${read.text}]`;
    let items: unknown[];
    try {
      items = JSON.parse(text) as unknown[];
    } catch {
      const at = part.start + Math.max(0, whereJsonBreaks(text) - 1);
      return yield { ok: false, issue: unreadable('The body is not JSON.', `byte ${at}`) };
    }
    if (items.length === 0 && !part.whole)
      return yield {
        ok: false,
        issue: unreadable('A record is missing beside a comma.', `byte ${part.start}`),
      };
    if (countKeysInText(text) !== countKeysInValue(items)) {
      const texts = elementsOfArray(text);
      const twice = texts.findIndex((item, i) => countKeysInText(item) !== countKeysInValue(items[i]));
      return yield { ok: false, issue: invalid('A key appears twice.', `/${number + Math.max(0, twice)}`) };
    }
    const records: SenmlRecord[] = [];
    for (const item of items) {
      const issue = jsonRecordFault(item, `/${number++}`);
      if (issue) return yield { ok: false, issue };
      records.push(item as SenmlRecord);
    }
    yield { ok: true, records };
  }
}

type Part = { start: number; end: number; whole: boolean };

/** Cuts the array's inside at commas between records; a text says where the array breaks. */
function* packParts(bytes: Uint8Array): Generator<Part | string, void> {
  const isSpace = (byte: number): boolean => byte === 32 || byte === 10 || byte === 13 || byte === 9;
  let i = 0;
  while (i < bytes.length && isSpace(bytes[i]!)) i++;
  if (bytes[i] !== 91) return yield `byte ${i}`;
  let start = ++i;
  let whole = true;
  let depth = 1;
  for (; i < bytes.length && depth > 0; i++) {
    const byte = bytes[i]!;
    if (byte === 34) {
      for (i++; i < bytes.length && bytes[i] !== 34; i++) if (bytes[i] === 92) i++;
    } else if (byte === 123 || byte === 91) {
      if (++depth > maxDepth) return yield `byte ${i}`;
    } else if (byte === 125 || byte === 93) depth--;
    else if (i - start > batchBytes + maxRecordBytes) return yield `byte ${start}`;
    else if (byte === 44 && depth === 1 && i - start >= batchBytes) {
      yield { start, end: i, whole: false };
      whole = false;
      start = i + 1;
    }
  }
  if (depth > 0 || bytes[i - 1] !== 93) return yield `byte ${Math.min(i, bytes.length)}`;
  yield { start, end: i - 1, whole };
  while (i < bytes.length && isSpace(bytes[i]!)) i++;
  if (i < bytes.length) yield `byte ${i}`;
}

function jsonRecordFault(item: unknown, where: string): IngestIssue | undefined {
  if (typeof item !== 'object' || item === null || Array.isArray(item))
    return invalid('A record must be an object.', where);
  for (const key of Object.keys(item)) {
    const kind = kindOf(key);
    if (kind === undefined) {
      if (key.endsWith('_')) return mustUnderstand(key, where);
      continue;
    }
    const value = (item as Record<string, unknown>)[key];
    const wanted = kind === 'number' ? 'number' : kind === 'boolean' ? 'boolean' : 'string';
    if (typeof value !== wanted) return wrongType(key, kind, where);
    if (kind === 'number' && !Number.isFinite(value)) return wrongType(key, kind, where);
    if (kind === 'data' && !/^[-\w]*$/.test(value as string)) return wrongType(key, kind, where);
  }
  return undefined;
}

/** Reads a pack in CBOR. The last batch is the first that is not ok. */
export function* senmlCborRecords(bytes: Uint8Array): Generator<RecordBatch, void> {
  const reader = new CborReader(bytes);
  const pack = { left: 0, number: 0 };
  try {
    if (reader.end === 0 || bytes[0]! >> 5 !== 4) {
      if (reader.end > 0) reader.skip(16);
      return yield {
        ok: false,
        issue:
          reader.end === 0
            ? unreadable('The body is empty.', 'byte 0')
            : invalid('A SenML pack must be an array.'),
      };
    }
    reader.head();
    pack.left = reader.arg;
    if (pack.left !== indefinite) reader.checkCount(pack.left);
  } catch (fault) {
    return yield { ok: false, issue: issueOf(fault, pack.number) };
  }
  for (;;) {
    const batch = cborBatch(reader, pack);
    yield batch;
    if (!batch.ok || pack.left === 0) return;
  }
}

function cborBatch(reader: CborReader, pack: { left: number; number: number }): RecordBatch {
  const records: SenmlRecord[] = [];
  try {
    while (records.length < batchRecords && pack.left !== 0) {
      if (pack.left === indefinite && reader.takeBreak()) {
        pack.left = 0;
        break;
      }
      const start = reader.pos;
      reader.skip(maxDepth);
      if (reader.pos - start > maxRecordBytes) throw reader.unreadable('A record is too large.', start);
      reader.pos = start;
      const read = cborRecord(reader.value(1), `/${pack.number}`);
      if (!read.ok) return read;
      records.push(read.record);
      pack.number++;
      if (pack.left !== indefinite) pack.left--;
    }
    if (pack.left === 0 && reader.pos !== reader.end)
      throw reader.unreadable('Bytes follow after the end of the pack.');
    return { ok: true, records };
  } catch (fault) {
    return { ok: false, issue: issueOf(fault, pack.number) };
  }
}

function cborRecord(
  value: CborValue,
  where: string,
): { ok: true; record: SenmlRecord } | { ok: false; issue: IngestIssue } {
  if (!(value instanceof Map)) return { ok: false, issue: invalid('A record must be a map.', where) };
  const record: Record<string, unknown> = {};
  for (const [label, item] of value) {
    // A text label stands for itself (section 6: extensions only), so a numbered field in letters is unknown.
    const key = typeof label === 'number' ? senmlCborLabels.get(label) : undefined;
    if (key === undefined) {
      if (typeof label === 'string' && label.endsWith('_'))
        return { ok: false, issue: mustUnderstand(label, where) };
      continue;
    }
    const kind = senmlFields[key];
    const plain = kind === 'number' ? cborNumber(item) : item;
    const good =
      kind === 'number'
        ? typeof plain === 'number' && Number.isFinite(plain)
        : kind === 'text'
          ? typeof plain === 'string'
          : kind === 'boolean'
            ? typeof plain === 'boolean'
            : plain instanceof Uint8Array;
    if (!good) return { ok: false, issue: wrongType(key, kind, where) };
    record[key] = plain;
  }
  return { ok: true, record: record as SenmlRecord };
}

/** Integers, floats, or decimal fractions (tag 4: exponent and mantissa), as section 6 allows. */
function cborNumber(value: CborValue): number | undefined {
  if (typeof value === 'number') return value;
  if (typeof value === 'bigint') return Number(value);
  if (!(value instanceof CborTag) || value.tag !== 4 || !Array.isArray(value.value)) return undefined;
  const [exponent, mantissa, ...rest] = value.value;
  const whole = typeof mantissa === 'number' || typeof mantissa === 'bigint';
  if (!Number.isInteger(exponent) || !whole || rest.length > 0) return undefined;
  return Number(`${mantissa}e${exponent as number}`);
}

function kindOf(key: string): SenmlKind | undefined {
  return Object.hasOwn(senmlFields, key) ? senmlFields[key as keyof SenmlRecord] : undefined;
}

function wrongType(key: string, kind: SenmlKind, where: string): IngestIssue {
  const wanted = {
    text: 'a text',
    number: 'a finite number',
    boolean: 'true or false',
    data: 'base64url data',
  };
  return invalid(`\`${key}\` must be ${wanted[kind]}.`, `${where}/${key}`);
}

function mustUnderstand(key: string, where: string): IngestIssue {
  return invalid(`The field ${quoted(key)} must be understood (its name ends in _) and is not.`, where);
}

function issueOf(fault: unknown, number: number): IngestIssue {
  if (!(fault instanceof CborFault)) throw fault;
  const at = `byte ${fault.at}`;
  return fault.kind === 'unreadable' ? unreadable(fault.detail, at) : invalid(fault.detail, `/${number}`, at);
}
