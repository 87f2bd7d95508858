/**
 * Recordings in CSV (RFC 4180): a header row `t,A,B,...`, then seconds and volts, or codes. Read in steps of a few
 * thousand rows.
 */
import { CsvError, parse } from 'csv-parse/sync';
import type { SampleArray } from '@/signal/model';
import { blockLimits } from '../block';
import type { IngestIssue } from '../block';
import { channelNameFault, rateFault, voltsFault } from './fields';
import { createPieces, runAtOnce } from './recording';
import type { Pieces, RecordingResult, Steps } from './recording';
import { invalid, quoted, tooLarge, unreadable } from './result';

export type CsvOptions = {
  /** The values are ADC codes (`?codes=1`). */
  codes?: boolean;
  /** From the `Turnmark-Rate` header; derived from the times where undefined. */
  rateHz?: number;
  /** Rate of the stream that this continues: taken where no rate is given and the times agree with it. */
  streamRateHz?: number;
  /** What a body may have; that of a request to the hub where undefined. */
  maxBytes?: number;
};

const timeNames = ['t', 't_s', 'time', 'time_s'];
/** Some 3 ms of work. */
const stepBytes = 32 * 1024;
const maxRowBytes = 16 * 1024;
const rowsAtOnce = 65_536;

/** Reads a whole body at once. Never throws. */
export function decodeCsv(bytes: Uint8Array, options: CsvOptions = {}): RecordingResult {
  return runAtOnce(decodeCsvSteps(bytes, options));
}

type Table = {
  channels: string[];
  times: Pieces<Float64Array>;
  /** How many decimals each time was written with; negative for whole tens. */
  decimals: Pieces<Int8Array>;
  columns: Pieces<Float64Array | Int32Array>[];
};

/** As `decodeCsv`, in steps. */
export function* decodeCsvSteps(bytes: Uint8Array, options: CsvOptions): Steps<RecordingResult> {
  const { codes = false, maxBytes = blockLimits.maxBodyBytes } = options;
  if (bytes.byteLength > maxBytes) return failed(tooLarge(`A CSV body has at most ${maxBytes} bytes.`));
  if (options.rateHz !== undefined) {
    const fault = rateFault(options.rateHz);
    if (fault !== undefined) return failed(invalid(fault, '/rate'));
  }
  let table: Table | undefined;
  let line = 1;
  for (const chunk of rowChunks(bytes)) {
    if (chunk === undefined)
      return failed(unreadable(`A row is longer than ${maxRowBytes} bytes.`, `line ${line}`));
    const read = readRows(chunk.text, chunk.delimiter, line);
    if (!read.ok) return read;
    let rows = read.rows;
    if (table === undefined && rows.length > 0) {
      const header = readHeader(rows[0]!, codes);
      if (!header.ok) return header;
      table = header.table;
      rows = rows.slice(1);
    }
    for (const row of rows) {
      const issue = addRow(table!, row, codes);
      if (issue) return failed(issue);
    }
    line += chunk.lines;
    yield;
  }
  if (table === undefined) return failed(unreadable('The body is empty.', 'line 1'));
  return yield* finish(table, options);
}

type Chunk = { text: Uint8Array; lines: number; delimiter: string[] };

/** Cuts the body at ends of rows; undefined for a row without an end in sight. */
function* rowChunks(bytes: Uint8Array): Generator<Chunk | undefined, void> {
  const newline = bytes.includes(10) ? 10 : 13;
  const delimiter = newline === 10 ? ['\r\n', '\n'] : ['\r'];
  const hasQuotes = bytes.includes(34);
  let start = 0;
  while (start < bytes.length) {
    let lines = 0;
    let end = start;
    let quoted = false;
    let i = start;
    for (; i < bytes.length && i - start < stepBytes; i++) {
      const byte = bytes[i]!;
      if (byte === 34 && hasQuotes) quoted = !quoted;
      else if (byte === newline && !quoted) {
        lines++;
        end = i + 1;
      }
    }
    const ended = i === bytes.length;
    if (ended) end = i;
    if (end === start || i - end > maxRowBytes) return yield undefined;
    yield { text: bytes.subarray(start, end), lines, delimiter };
    start = end;
  }
}

function readRows(
  text: Uint8Array,
  delimiter: string[],
  line: number,
): { ok: true; rows: string[][] } | { ok: false; issue: IngestIssue } {
  try {
    const rows = parse(Buffer.from(text.buffer, text.byteOffset, text.byteLength), {
      bom: line === 1,
      record_delimiter: delimiter,
      relax_column_count: true,
      skip_empty_lines: true,
      trim: true,
      max_record_size: maxRowBytes,
    });
    return { ok: true, rows: rows as string[][] };
  } catch (error) {
    if (!(error instanceof CsvError)) throw error;
    const lines = (error as CsvError & { lines?: number }).lines;
    const detail = 'The body is not CSV: a row is too long, or a quotation mark stands where none may be.';
    return { ok: false, issue: unreadable(detail, `line ${line + Math.max(0, (lines ?? 1) - 1)}`) };
  }
}

function readHeader(
  row: string[],
  codes: boolean,
): { ok: true; table: Table } | { ok: false; issue: IngestIssue } {
  const [time = '', ...names] = row;
  if (!timeNames.includes(time)) {
    const detail = `The header row must begin with ${timeNames.join(', ')}; it begins with ${quoted(time)}.`;
    return failed(invalid(detail, undefined, 'line 1'));
  }
  if (names.length === 0) return failed(invalid('The header row names no channel.', undefined, 'line 1'));
  if (names.length > blockLimits.maxChannels)
    return failed(tooLarge(`A recording has at most ${blockLimits.maxChannels} channels.`));
  const channels: string[] = [];
  for (const name of names) {
    if (/_[munkM]V$/.test(name)) {
      const detail = `The column ${quoted(name)} is not in volts: write volts, and end its name with _V or nothing.`;
      return failed(invalid(detail, undefined, 'line 1'));
    }
    const channel = name.replace(codes ? /_(?:V|v|volts?|codes?|counts?|lsb)$/ : /_(?:V|v|volts?)$/, '');
    const fault = channelNameFault(channel);
    if (fault !== undefined) return failed(invalid(fault, undefined, 'line 1'));
    if (channels.includes(channel))
      return failed(invalid(`The channel ${quoted(channel)} appears twice.`, undefined, 'line 1'));
    channels.push(channel);
  }
  const makeFloats = (length: number): Float64Array => new Float64Array(length);
  return {
    ok: true,
    table: {
      channels,
      times: createPieces(makeFloats),
      decimals: createPieces((length) => new Int8Array(length)),
      columns: channels.map(() =>
        createPieces<Float64Array | Int32Array>(codes ? (length) => new Int32Array(length) : makeFloats),
      ),
    },
  };
}

const decimal = /^[+-]?(?:\d+(?:\.(\d*))?|\.(\d+))(?:[eE]([+-]?\d{1,3}))?$/;

function addRow(table: Table, row: string[], codes: boolean): IngestIssue | undefined {
  const number = table.times.length() + 1;
  const width = table.channels.length + 1;
  if (row.length !== width) return rowIssue(number, `has ${row.length} fields; the header row has ${width}`);
  const written = decimal.exec(row[0]!);
  const timeS = Number(row[0]);
  if (written === null || !Number.isFinite(timeS))
    return rowIssue(number, `has the time ${quoted(row[0]!)}, which is no number`);
  const decimals = (written[1] ?? written[2] ?? '').length - Number(written[3] ?? 0);
  table.times.push(timeS);
  table.decimals.push(Math.max(-128, Math.min(127, decimals)));
  for (let c = 1; c < width; c++) {
    const field = row[c]!;
    const value = Number(field);
    if (!decimal.test(field) || !Number.isFinite(value))
      return rowIssue(number, `has ${quoted(field)} for ${table.channels[c - 1]}, which is no number`);
    if (codes && (value | 0) !== value)
      return rowIssue(
        number,
        `has ${quoted(field)} for ${table.channels[c - 1]}, which is no code of 32 bits`,
      );
    if (!codes && voltsFault(value) !== undefined)
      return rowIssue(
        number,
        `has ${quoted(field)} for ${table.channels[c - 1]}, which is beyond ${blockLimits.maxVolts} V`,
      );
    table.columns[c - 1]!.push(value);
  }
  return undefined;
}

function* finish(table: Table, options: CsvOptions): Steps<RecordingResult> {
  const { times } = table;
  const rows = times.length();
  if (rows === 0) return failed(invalid('The body has no row after its header.'));
  const firstS = times.at(0);
  const rateHz = options.rateHz ?? (yield* rateOf(table, options.streamRateHz));
  if (rateHz === undefined)
    return failed(
      invalid(
        'Without a rate at least two rows are needed, the last later than the first.',
        '/rate',
        `row ${rows}`,
      ),
    );
  const fault = rateFault(rateHz);
  if (fault !== undefined)
    return failed(invalid(`${fault} The times of this body give ${rateHz.toPrecision(6)} Hz.`, '/rate'));
  const uneven = yield* firstUneven(table, rateHz);
  if (uneven >= 0) {
    const wantedS = firstS + uneven / rateHz;
    const detail =
      `is uneven: its time is ${times.at(uneven)} s, at ${Number(rateHz.toPrecision(9))} Hz it should be ` +
      `${Number(wantedS.toPrecision(12))} s, give or take ${Number((0.01 / rateHz + halfUnitS(table, uneven)).toPrecision(3))} s`;
    return failed(rowIssue(uneven + 1, detail));
  }
  const columns = table.columns.map((column) => column.finish());
  const pieces = columns[0]!.map((_, p) => columns.map((column): SampleArray => column[p]!));
  return { ok: true, recording: { rateHz, timeS: firstS, channels: table.channels, length: rows, pieces } };
}

function* rateOf(table: Table, streamRateHz: number | undefined): Steps<number | undefined> {
  if (streamRateHz !== undefined && (yield* firstUneven(table, streamRateHz)) < 0) return streamRateHz;
  const rows = table.times.length();
  const spanS = table.times.at(rows - 1) - table.times.at(0);
  return rows >= 2 && spanS > 0 ? (rows - 1) / spanS : undefined;
}

/** Index of the first row whose time is off by more than 1 % of the step and half a unit of its last decimal, or -1. */
function* firstUneven(table: Table, rateHz: number): Steps<number> {
  const { times } = table;
  const firstS = times.at(0);
  for (let i = 0, rows = times.length(); i < rows; i++) {
    if (i % rowsAtOnce === rowsAtOnce - 1) yield;
    const wantedS = firstS + i / rateHz;
    const rounding = 4 * Number.EPSILON * Math.abs(wantedS);
    if (Math.abs(times.at(i) - wantedS) > 0.01 / rateHz + halfUnitS(table, i) + rounding) return i;
  }
  return -1;
}

/** Half a unit of the last decimal with which a time was written, s. */
function halfUnitS({ decimals }: Table, row: number): number {
  return 0.5 * 10 ** -decimals.at(row);
}

function rowIssue(number: number, what: string): IngestIssue {
  return invalid(`Row ${number} after the header ${what}.`, undefined, `row ${number}`);
}

function failed(issue: IngestIssue): { ok: false; issue: IngestIssue } {
  return { ok: false, issue };
}
