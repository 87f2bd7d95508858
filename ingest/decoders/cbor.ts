/**
 * Blocks in CBOR (RFC 8949) with typed arrays (RFC 8746).
 *
 * The sample arrays of the result may be views on `bytes`: use them before the message's memory is used again, copy
 * them to keep them, never write to them.
 */
import type { IngestIssue } from '../block';
import { blockLimits } from '../block';
import { readBlock, readSeq, readStream } from './cbor-block';
import { hasSeq, hasStream, readKey } from './cbor-keys';
import { CborReader, indefinite } from './cbor-reader';
import { CborFault } from './cbor-values';
import { invalid, isNameless, noBatch, tooLarge, unreadable } from './result';
import type { BlockResult, MessageResult } from './result';

/** Reads one message: a block or an array of blocks. Never throws. */
export function decodeCbor(bytes: Uint8Array, maxBytes: number = blockLimits.maxMessageBytes): MessageResult {
  if (bytes.byteLength > maxBytes)
    return { ok: false, issue: tooLarge(`A CBOR message has at most ${maxBytes} bytes.`) };
  try {
    return readMessage(new CborReader(bytes));
  } catch (fault) {
    if (fault instanceof CborFault) return { ok: false, issue: issueOf(fault, '') };
    throw fault;
  }
}

function readMessage(reader: CborReader): MessageResult {
  if (reader.end === 0) return { ok: false, issue: unreadable('The message is empty.', 'byte 0') };
  const major = reader.bytes[0]! >> 5;
  const batch = major === 4;
  const blocks: BlockResult[] = [];
  let whole: IngestIssue | undefined;
  let nameless = 0;
  if (batch) {
    reader.head();
    const count = reader.arg;
    if (count !== indefinite) reader.checkCount(count);
    for (let i = 0; count === indefinite ? !reader.takeBreak() : i < count; i++) {
      const result = readOne(reader, `/${i}`);
      if (isNameless(result) && ++nameless > blockLimits.maxNameless)
        return { ok: false, issue: noBatch(`/${i}`) };
      blocks.push(result);
    }
    if (blocks.length === 0) whole = invalid('The batch holds no block.');
  } else if (major === 5) {
    blocks.push(readOne(reader, ''));
  } else {
    reader.skip();
    whole = invalid('The message is neither a block (a map) nor a batch (an array of blocks).');
  }
  if (reader.pos !== reader.end) throw reader.unreadable('Bytes follow after the end of the message.');
  return whole ? { ok: false, issue: whole } : { ok: true, batch, blocks };
}

/** One block; where it is well-formed but wrong, the reader is left behind it all the same. */
function readOne(reader: CborReader, pointer: string): BlockResult {
  const start = reader.pos;
  try {
    return { ok: true, block: readBlock(reader, pointer) };
  } catch (fault) {
    if (!(fault instanceof CborFault) || fault.kind === 'unreadable') throw fault;
    reader.pos = start;
    return { ok: false, issue: issueOf(fault, pointer), ...skim(reader) };
  }
}

/** Passes over a block that was found wrong, and says which one it is where that can be read. */
function skim(reader: CborReader): { stream: string | undefined; seq: number | undefined } {
  const start = reader.pos;
  reader.skip();
  const end = reader.pos;
  let stream: string | undefined;
  let seq: number | undefined;
  reader.pos = start;
  reader.head();
  if (reader.major === 5) {
    const count = reader.arg;
    for (let i = 0; count === indefinite ? !reader.takeBreak() : i < count; i++) {
      const keyAt = reader.pos;
      const key = readKey(reader);
      if (key === 0) {
        reader.pos = keyAt;
        reader.skip();
      }
      const valueAt = reader.pos;
      try {
        if (key === hasStream) stream = readStream(reader, '');
        else if (key === hasSeq) seq = readSeq(reader, '');
      } catch (fault) {
        if (!(fault instanceof CborFault)) throw fault;
      }
      reader.pos = valueAt;
      reader.skip();
    }
  }
  reader.pos = end;
  return { stream, seq };
}

function issueOf(fault: CborFault, pointer: string): IngestIssue {
  const at = `byte ${fault.at}`;
  if (fault.kind === 'unreadable') return unreadable(fault.detail, at);
  if (fault.kind === 'too-large') return { ...tooLarge(fault.detail, fault.pointer), at };
  return invalid(fault.detail, fault.pointer ?? (pointer === '' ? undefined : pointer), at);
}
