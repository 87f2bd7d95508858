/** Blocks in a file: CBOR, one batch or a sequence of them (RFC 8742), or JSON, one batch or a line each. */
import type { CaptureGap, Piece } from '@/db';
import { CborReader } from '@/ingest/decoders/cbor-reader';
import { CborFault } from '@/ingest/decoders/cbor-values';
import { decodeCbor } from '@/ingest/decoders/cbor';
import { decodeJson } from '@/ingest/decoders/json';
import type { MessageResult } from '@/ingest/decoders/result';
import type { Block, IngestIssue } from '@/ingest/block';
import { refused, unixTimeOf, unreadable } from './upload';
import type { UploadResult } from './upload';

/** Each message of the file, with its number from 1. */
type Messages = () => Generator<MessageResult>;

/** Where the next item of a CBOR sequence begins; throws `CborFault`. */
function* cborMessages(bytes: Uint8Array): Generator<MessageResult> {
  for (let at = 0; at < bytes.byteLength;) {
    const rest = bytes.subarray(at);
    const reader = new CborReader(rest);
    try {
      reader.skip();
    } catch (fault) {
      if (!(fault instanceof CborFault)) throw fault;
      return yield unreadable(fault.detail, `byte ${at + fault.at}`);
    }
    yield decodeCbor(rest.subarray(0, reader.pos));
    at += reader.pos;
  }
}

function* jsonMessages(bytes: Uint8Array): Generator<MessageResult> {
  // One text over several lines is one message; else each line is.
  const whole = decodeJson(bytes);
  if (whole.ok) return yield whole;
  for (let at = 0; at < bytes.byteLength;) {
    const newline = bytes.indexOf(10, at);
    const end = newline < 0 ? bytes.byteLength : newline;
    const line = bytes.subarray(at, end);
    if (line.some((byte) => byte > 32)) yield decodeJson(line);
    at = end + 1;
  }
}

function withPlace(issue: IngestIssue, message: number): { ok: false; issue: IngestIssue } {
  const at = issue.at === undefined ? `message ${message}` : `message ${message}, ${issue.at}`;
  return { ok: false, issue: { ...issue, at } };
}

/** Lost samples between two blocks of a stream, as on the wire; undefined where one follows the other. */
function lossBetween(before: Block, after: Block, rateHz: number): Omit<CaptureGap, 'fromIndex'> | undefined {
  const missing = after.seq - before.seq - 1;
  if (missing === 0) return undefined;
  if (before.timeS === undefined || after.timeS === undefined) {
    return { lostSamples: missing * before.length, estimated: true };
  }
  const lost = Math.round((after.timeS - before.timeS) * rateHz) - before.length;
  return { lostSamples: Math.max(0, lost), estimated: false };
}

const namesOf = (block: Block) => block.channels.map(({ name }) => name);

type Placed = { block: Block; startIndex: number; loss: Omit<CaptureGap, 'fromIndex'> | undefined };

/** Each block with its place on the capture's axis, or the first thing that is wrong. */
function* placed(messages: Messages): Generator<Placed, IngestIssue | undefined> {
  let first: Block | undefined;
  let last: Block | undefined;
  let next = 0;
  let number = 0;
  for (const message of messages()) {
    number += 1;
    if (!message.ok) return withPlace(message.issue, number).issue;
    for (const result of message.blocks) {
      if (!result.ok) return withPlace(result.issue, number).issue;
      const { block } = result;
      first ??= block;
      const fault = faultOf(first, last, block);
      if (fault !== undefined) return withPlace(refused(fault).issue, number).issue;
      if (last !== undefined && block.seq === last.seq) continue;
      const loss = last === undefined ? undefined : lossBetween(last, block, first.rateHz ?? 1);
      next += loss?.lostSamples ?? 0;
      yield { block, startIndex: next, loss };
      next += block.length;
      last = block;
    }
  }
  return first === undefined ? refused('The file holds no block.').issue : undefined;
}

function faultOf(first: Block, last: Block | undefined, block: Block): string | undefined {
  if (first.rateHz === undefined) return 'The first block must give the rate.';
  if (block.stream !== first.stream)
    return `The file holds two streams, "${first.stream}" and "${block.stream}".`;
  if (block.rateHz !== undefined && block.rateHz !== first.rateHz)
    return 'The rate changes within the stream.';
  const wanted = namesOf(first);
  if (block.channels.length !== wanted.length || !namesOf(block).every((name) => wanted.includes(name))) {
    return 'The channels change within the stream.';
  }
  if (last !== undefined && block.seq < last.seq) return `Block ${block.seq} comes after block ${last.seq}.`;
  return undefined;
}

function readMessages(messages: Messages): UploadResult {
  const gaps: CaptureGap[] = [];
  let first: Block | undefined;
  let lengthSamples = 0;
  // Read through once before anything is stored: a fault in the last block must leave nothing behind.
  const walk = placed(messages);
  for (let step = walk.next(); ; step = walk.next()) {
    if (step.done) {
      if (step.value !== undefined) return { ok: false, issue: step.value };
      break;
    }
    const { block, startIndex, loss } = step.value;
    first ??= block;
    if (loss !== undefined) gaps.push({ fromIndex: startIndex - loss.lostSamples, ...loss });
    lengthSamples = startIndex + block.length;
  }
  if (first === undefined) return refused('The file holds no block.');

  function* pieces(): Generator<Piece> {
    for (const { block, startIndex } of placed(messages)) {
      yield { startIndex, count: block.length, channels: block.channels };
    }
  }
  return {
    ok: true,
    upload: {
      rateHz: first.rateHz ?? 1,
      channels: namesOf(first),
      stream: first.stream,
      startedAtS: unixTimeOf(first.timeS),
      gaps,
      lengthSamples,
      pieces,
    },
  };
}

export const readCborFile = (bytes: Uint8Array): UploadResult => readMessages(() => cborMessages(bytes));
export const readJsonFile = (bytes: Uint8Array): UploadResult => readMessages(() => jsonMessages(bytes));
