/** One block in CBOR. Functions here throw a `CborFault`. */
import type { SampleArray } from '@/signal/model';
import type { Block, BlockChannel } from '../block';
import { blockLimits } from '../block';
import {
  hasCodes,
  hasRate,
  hasSamples,
  hasSeq,
  hasStream,
  hasTime,
  keyNames,
  otherKey,
  readKey,
} from './cbor-keys';
import { indefinite } from './cbor-reader';
import type { CborReader } from './cbor-reader';
import { readPlainArray, readTypedArray, refuseNoVolts } from './cbor-samples';
import { CborFault } from './cbor-values';
import {
  channelNameFault,
  firstNoVolts64,
  rateFault,
  seqFault,
  streamFault,
  timeFault,
  toCodes,
} from './fields';
import { pointerPart, quoted } from './result';

/** Reads the block that follows; `pointer` names it within the message. */
export function readBlock(reader: CborReader, pointer: string): Block {
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
      case hasCodes:
        codes = readCodes(reader, pointer);
        break;
    }
  }
  requireKeys(seen, start, pointer);
  if (plain !== 0) settlePlain(block.channels, plain, codes, start, pointer);
  return block;
}

export function readStream(reader: CborReader, pointer: string): string {
  const at = reader.pos;
  reader.head();
  if (reader.major !== 3) throw new CborFault('invalid', '`stream` must be a text.', at, pointer + '/stream');
  const stream = reader.text();
  const fault = streamFault(stream);
  if (fault !== undefined) throw new CborFault('invalid', fault, at, pointer + '/stream');
  return stream;
}

export function readSeq(reader: CborReader, pointer: string): number {
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

/** Once it is known what the plain arrays hold: makes codes of them, or sees that they can be volts. */
function settlePlain(
  channels: BlockChannel[],
  plain: number,
  areCodes: boolean,
  at: number,
  pointer: string,
): void {
  for (let i = 0; i < channels.length; i++) {
    if ((plain & (1 << i)) === 0) continue;
    const channel = channels[i]!;
    const samples = channel.samples as Float64Array;
    const where = `${pointer}/samples${pointerPart(channel.name)}`;
    if (!areCodes) {
      refuseNoVolts(samples, firstNoVolts64(samples), at, where);
      continue;
    }
    const codes = toCodes(samples);
    if (typeof codes === 'number')
      throw new CborFault('invalid', 'A code must be a whole number of 32 bits.', at, `${where}/${codes}`);
    channel.samples = codes;
  }
}
