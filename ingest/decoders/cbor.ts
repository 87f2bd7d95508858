/**
 * Blocks in CBOR (RFC 8949) with typed arrays (RFC 8746).
 *
 * The sample arrays of the result may be views on `bytes`: use them before the message's memory is used again, copy
 * them to keep them, never write to them.
 */
import type { SampleArray } from '@/signal/model';
import type { Block, BlockChannel, IngestIssue } from '../block';
import { blockLimits } from '../block';
import { CborFault, CborReader, indefinite, keyId } from './cbor-reader';
import { readPlainArray, readTypedArray } from './cbor-samples';
import { channelNameFault, rateFault, seqFault, streamFault, timeFault, toCodes } from './fields';
import { invalid, pointerPart, quoted, tooLarge, unreadable } from './result';
import type { BlockResult, MessageResult } from './result';

/** Reads one message: a block or an array of blocks. Never throws. */
export function decodeCbor(bytes: Uint8Array): MessageResult {
  if (bytes.byteLength > blockLimits.maxMessageBytes) {
    return {
      ok: false,
      issue: tooLarge(`A CBOR message has at most ${blockLimits.maxMessageBytes} bytes.`),
    };
  }
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
  if (batch) {
    reader.head();
    const count = reader.arg;
    if (count !== indefinite) reader.checkCount(count);
    for (let i = 0; count === indefinite ? !reader.takeBreak() : i < count; i++) {
      blocks.push(readOne(reader, `/${i}`));
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

const hasStream = 1;
const hasSeq = 2;
const hasRate = 4;
const hasTime = 8;
const hasSamples = 16;
const hasCodes = 32;

function readBlock(reader: CborReader, pointer: string): Block {
  const start = reader.pos;
  reader.head();
  if (reader.major !== 5) throw new CborFault('invalid', 'A block must be a map.', start, pointer);
  const count = reader.arg;
  if (count !== indefinite) reader.checkCount(count * 2);
  const block: Block = { stream: '', seq: 0, rateHz: undefined, timeS: undefined, length: 0, channels: [] };
  let seen = 0;
  let codes = false;
  let plain = 0;
  let others: Set<string> | undefined;
  for (let i = 0; count === indefinite ? !reader.takeBreak() : i < count; i++) {
    const at = reader.pos;
    const key = readKey(reader);
    if (key === 0) {
      const id = otherKey(reader, at);
      others ??= new Set();
      if (others.has(id)) throw new CborFault('invalid', 'A key appears twice.', at, pointer);
      others.add(id);
      reader.skip();
      if (reader.skippedDepth > 6)
        throw new CborFault('invalid', 'A value is nested too deeply.', at, pointer);
      continue;
    }
    if (seen & key) {
      const name = keyNames[key]!;
      throw new CborFault('invalid', `The key ${quoted(name)} appears twice.`, at, `${pointer}/${name}`);
    }
    seen |= key;
    switch (key) {
      case hasStream:
        block.stream = readStream(reader, pointer);
        break;
      case hasSeq:
        block.seq = readSeq(reader, pointer);
        break;
      case hasRate:
        block.rateHz = readNumber(reader, pointer + '/rate', rateFault);
        break;
      case hasTime:
        block.timeS = readNumber(reader, pointer + '/time', timeFault);
        break;
      case hasSamples:
        plain = readSamples(reader, pointer, block);
        break;
      default:
        codes = readCodes(reader, pointer);
    }
  }
  requireKeys(seen, start, pointer);
  if (codes && plain !== 0) plainToCodes(block.channels, plain, start, pointer);
  return block;
}

const keyNames: Record<number, string> = {
  [hasStream]: 'stream',
  [hasSeq]: 'seq',
  [hasRate]: 'rate',
  [hasTime]: 'time',
  [hasSamples]: 'samples',
  [hasCodes]: 'codes',
};

const wordBytes = new Map(
  Object.entries(keyNames).map(([bit, name]) => [
    name.charCodeAt(0) * 256 + name.charCodeAt(1),
    { bit: Number(bit), bytes: Uint8Array.from(name, (c) => c.charCodeAt(0)) },
  ]),
);
/** Words by their first two letters: 'st', 'se', 'ra', 'ti', 'sa', 'co'. */
const wordTable: ({ bit: number; bytes: Uint8Array } | undefined)[] = [];
for (const [prefix, word] of wordBytes) wordTable[hashPrefix(prefix >> 8, prefix & 255)] = word;

function hashPrefix(first: number, second: number): number {
  return ((first & 31) << 5) | (second & 31);
}

/** Reads a key and gives its bit; 0 for one that the format does not know. */
function readKey(reader: CborReader): number {
  reader.head();
  if (reader.major !== 3) return 0;
  if (reader.arg === indefinite) return 0;
  const length = reader.arg;
  const start = reader.content(length);
  const bytes = reader.bytes;
  if (length < 3 || length > 7) return 0;
  const word = wordTable[hashPrefix(bytes[start]!, bytes[start + 1]!)];
  if (word === undefined || word.bytes.length !== length) return 0;
  for (let i = 0; i < length; i++) if (bytes[start + i] !== word.bytes[i]) return 0;
  return word.bit;
}

/** Passes over a key that is none of ours and tells it apart from others. A known key in chunks is refused. */
function otherKey(reader: CborReader, at: number): string {
  reader.pos = at;
  reader.skip();
  const end = reader.pos;
  const major = reader.bytes[at]! >> 5;
  if (major !== 0 && major !== 1 && major !== 3) {
    const raw = reader.bytes.subarray(at, end);
    return 'raw' + Buffer.from(raw.buffer, raw.byteOffset, raw.byteLength).toString('latin1');
  }
  reader.pos = at;
  const key = reader.value();
  if (typeof key === 'string' && Object.values(keyNames).includes(key))
    throw new CborFault('invalid', `The key ${quoted(key)} must be written in one piece.`, at);
  return keyId(key);
}

function readStream(reader: CborReader, pointer: string): string {
  const at = reader.pos;
  reader.head();
  if (reader.major !== 3) throw new CborFault('invalid', '`stream` must be a text.', at, pointer + '/stream');
  const stream = reader.text();
  const fault = streamFault(stream);
  if (fault !== undefined) throw new CborFault('invalid', fault, at, pointer + '/stream');
  return stream;
}

function readSeq(reader: CborReader, pointer: string): number {
  const at = reader.pos;
  reader.head();
  const fault = seqFault(reader.major === 0 ? reader.arg : NaN);
  if (fault !== undefined) throw new CborFault('invalid', fault, at, pointer + '/seq');
  return reader.arg;
}

function readNumber(reader: CborReader, pointer: string, faultOf: (value: number) => string | undefined) {
  const at = reader.pos;
  reader.head();
  const value = reader.number() ?? NaN;
  const fault = faultOf(value);
  if (fault !== undefined) throw new CborFault('invalid', fault, at, pointer);
  return value;
}

function readCodes(reader: CborReader, pointer: string): boolean {
  const at = reader.pos;
  reader.head();
  if (reader.major !== 7 || (reader.info !== 20 && reader.info !== 21))
    throw new CborFault('invalid', '`codes` must be true or false.', at, pointer + '/codes');
  return reader.info === 21;
}

/** Fills the block's channels; gives a bit mask of those that came as plain arrays. */
function readSamples(reader: CborReader, pointer: string, block: Block): number {
  const at = reader.pos;
  reader.head();
  if (reader.major !== 5)
    throw new CborFault('invalid', '`samples` must be a map of arrays.', at, pointer + '/samples');
  const count = reader.arg;
  if (count !== indefinite) reader.checkCount(count * 2);
  const channels = block.channels;
  let plain = 0;
  for (let i = 0; count === indefinite ? !reader.takeBreak() : i < count; i++) {
    const name = readChannelName(reader, channels, pointer);
    if (i >= blockLimits.maxChannels)
      throw new CborFault(
        'too-large',
        `A block has at most ${blockLimits.maxChannels} channels.`,
        at,
        pointer + '/samples',
      );
    const where = pointer + '/samples' + pointerPart(name);
    const itemAt = reader.pos;
    const major = reader.head();
    let samples: SampleArray;
    if (major === 6) samples = readTypedArray(reader, where);
    else if (major === 4) {
      samples = readPlainArray(reader, where);
      plain |= 1 << i;
    } else throw new CborFault('invalid', 'Samples must be an array.', itemAt, where);
    if (i === 0) block.length = samples.length;
    else if (samples.length !== block.length)
      throw new CborFault('invalid', 'The channels of a block must have one length.', itemAt, where);
    channels.push({ name, samples });
  }
  if (block.length === 0)
    throw new CborFault('invalid', 'A block must hold at least one sample.', at, pointer + '/samples');
  return plain;
}

function readChannelName(reader: CborReader, channels: BlockChannel[], pointer: string): string {
  const at = reader.pos;
  reader.head();
  if (reader.major !== 3)
    throw new CborFault('invalid', 'A channel name must be a text.', at, pointer + '/samples');
  const name = reader.text();
  const fault = channelNameFault(name);
  if (fault !== undefined) throw new CborFault('invalid', fault, at, pointer + '/samples');
  for (const channel of channels)
    if (channel.name === name)
      throw new CborFault('invalid', `The channel ${quoted(name)} appears twice.`, at, pointer + '/samples');
  return name;
}

function requireKeys(seen: number, at: number, pointer: string): void {
  for (const key of [hasStream, hasSeq, hasSamples]) {
    if (seen & key) continue;
    const name = keyNames[key]!;
    throw new CborFault('invalid', `\`${name}\` is missing.`, at, `${pointer}/${name}`);
  }
}

function plainToCodes(channels: BlockChannel[], plain: number, at: number, pointer: string): void {
  for (let i = 0; i < channels.length; i++) {
    if ((plain & (1 << i)) === 0) continue;
    const channel = channels[i]!;
    const codes = toCodes(channel.samples as Float64Array);
    if (typeof codes === 'number') {
      const where = `${pointer}/samples${pointerPart(channel.name)}/${codes}`;
      throw new CborFault('invalid', 'A code must be a whole number of 32 bits.', at, where);
    }
    channel.samples = codes;
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
