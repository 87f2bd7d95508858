/**
 * The blocks of a CBOR or JSON file, one at a time: what a file may hold is far more than one message may, so that it is
 * never read whole. CBOR is one batch or a sequence of them (RFC 8742), JSON one batch or several after each other.
 */
import { decodeCbor } from '@/ingest/decoders/cbor';
import { CborReader, indefinite } from '@/ingest/decoders/cbor-reader';
import { CborFault } from '@/ingest/decoders/cbor-values';
import { decodeJson } from '@/ingest/decoders/json';
import type { BlockResult, MessageResult } from '@/ingest/decoders/result';
import { invalid, tooLarge, unreadable } from '@/ingest/decoders/result';
import type { IngestIssue } from '@/ingest/block';

/** A block that can be used, or why the file cannot; `message` counts the batches from 1. */
export type FileBlock = { result: BlockResult | { ok: false; issue: IngestIssue }; message: number };

/** One block with all its samples written out in full. */
const maxBlockBytes = 16 * 1024 * 1024;

const emptyBatch = invalid('The batch holds no block.');
const largeBlock = tooLarge(`A block in a file has at most ${maxBlockBytes} bytes.`);

/** What a decoder made of one item. */
function onlyBlock(read: MessageResult): FileBlock['result'] {
  if (!read.ok) return read;
  const [first] = read.blocks;
  if (read.batch || first === undefined)
    return { ok: false, issue: invalid('A batch holds blocks, not batches.') };
  return first;
}

export function* cborFileBlocks(bytes: Uint8Array): Generator<FileBlock> {
  let message = 0;
  for (let at = 0; at < bytes.byteLength;) {
    message += 1;
    const batch = bytes[at]! >> 5 === 4;
    let left = 1;
    try {
      if (batch) {
        const head = windowAt(bytes, at);
        head.head();
        left = head.arg;
        at += head.pos;
      }
      if (left === 0) return yield { result: { ok: false, issue: emptyBatch }, message };
      for (let i = 0; left === indefinite || i < left; i++) {
        const reader = windowAt(bytes, at);
        if (left === indefinite && reader.takeBreak()) {
          at += 1;
          if (i === 0) return yield { result: { ok: false, issue: emptyBatch }, message };
          break;
        }
        reader.skip();
        const item = bytes.subarray(at, at + reader.pos);
        at += reader.pos;
        yield { result: onlyBlock(decodeCbor(item, maxBlockBytes)), message };
      }
    } catch (fault) {
      if (!(fault instanceof CborFault)) throw fault;
      const cut = bytes.byteLength - at > maxBlockBytes && fault.at >= maxBlockBytes;
      const issue = cut ? largeBlock : unreadable(fault.detail, `byte ${at + fault.at}`);
      return yield { result: { ok: false, issue }, message };
    }
  }
}

function windowAt(bytes: Uint8Array, at: number): CborReader {
  return new CborReader(bytes.subarray(at, at + maxBlockBytes));
}

const comma = 44;
const [openArray, closeArray, openObject, closeObject, quote, backslash] = [91, 93, 123, 125, 34, 92];

export function* jsonFileBlocks(bytes: Uint8Array): Generator<FileBlock> {
  let message = 0;
  let at = skipSpace(bytes, bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf ? 3 : 0);
  while (at < bytes.byteLength) {
    message += 1;
    const batch = bytes[at] === openArray;
    if (batch) at = skipSpace(bytes, at + 1);
    if (batch && bytes[at] === closeArray) return yield { result: { ok: false, issue: emptyBatch }, message };
    for (;;) {
      const end = endOfValue(bytes, at);
      if (end - at > maxBlockBytes) return yield { result: { ok: false, issue: largeBlock }, message };
      yield { result: onlyBlock(decodeJson(bytes.subarray(at, end), maxBlockBytes)), message };
      at = skipSpace(bytes, end);
      if (!batch) break;
      const next = bytes[at];
      if (next !== comma && next !== closeArray) {
        const issue = unreadable('The file is not JSON.', `byte ${at}`);
        return yield { result: { ok: false, issue }, message };
      }
      at = skipSpace(bytes, at + 1);
      if (next === closeArray) break;
    }
  }
}

function isSpace(byte: number | undefined): boolean {
  return byte === 32 || byte === 10 || byte === 13 || byte === 9;
}

function skipSpace(bytes: Uint8Array, from: number): number {
  let at = from;
  while (isSpace(bytes[at])) at += 1;
  return at;
}

/** Just after the JSON value that begins here; it is not checked. Looks no further than a block may reach. */
function endOfValue(bytes: Uint8Array, from: number): number {
  const stop = Math.min(bytes.byteLength, from + maxBlockBytes + 1);
  let depth = 0;
  for (let at = from; at < stop; at++) {
    const byte = bytes[at];
    if (byte === quote) {
      for (at += 1; at < stop && bytes[at] !== quote; at++) if (bytes[at] === backslash) at += 1;
    } else if (byte === openObject || byte === openArray) depth += 1;
    else if (byte === closeObject || byte === closeArray) {
      depth -= 1;
      if (depth <= 0) return depth < 0 ? Math.max(at, from + 1) : at + 1;
    } else if (depth === 0 && (byte === comma || isSpace(byte))) return Math.max(at, from + 1);
  }
  return stop;
}
