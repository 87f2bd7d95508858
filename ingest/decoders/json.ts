/** Blocks in JSON (RFC 8259): plain arrays, volts unless `codes` is true. */
import type { SampleArray } from '@/signal/model';
import { blockLimits } from '../block';
import type { Block, BlockChannel } from '../block';
import { channelNameFault, rateFault, seqFault, streamFault, timeFault, toCodes, voltsFault } from './fields';
import {
  countKeysInText,
  countKeysInValue,
  elementsOfArray,
  placeOf,
  textOf,
  whereJsonBreaks,
} from './json-text';
import { invalid, isNameless, noBatch, pointerPart, tooLarge, unreadable } from './result';
import type { BlockResult, MessageResult } from './result';

/** Reads one message: a block or an array of blocks, as UTF-8. Never throws. */
export function decodeJson(bytes: Uint8Array, maxBytes: number = blockLimits.maxMessageBytes): MessageResult {
  if (bytes.byteLength > maxBytes)
    return { ok: false, issue: tooLarge(`A JSON message has at most ${maxBytes} bytes.`) };
  const read = textOf(bytes);
  if (!read.ok) return read;
  const { text } = read;
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch {
    const at = placeOf(text, Math.max(0, whereJsonBreaks(text)));
    return { ok: false, issue: unreadable('The message is not JSON.', at) };
  }
  if (typeof value !== 'object' || value === null) {
    return {
      ok: false,
      issue: invalid('The message is neither a block (an object) nor a batch (an array of blocks).'),
    };
  }
  const batch = Array.isArray(value);
  const items: unknown[] = Array.isArray(value) ? value : [value];
  if (items.length === 0) return { ok: false, issue: invalid('The batch holds no block.') };
  const blocks: BlockResult[] = [];
  let nameless = 0;
  for (const [i, item] of items.entries()) {
    const result = readBlock(item, batch ? `/${i}` : '');
    if (isNameless(result) && ++nameless > blockLimits.maxNameless)
      return { ok: false, issue: noBatch(`/${i}`) };
    blocks.push(result);
  }
  if (countKeysInText(text) !== countKeysInValue(value)) {
    const texts = batch ? elementsOfArray(text) : [text];
    texts.forEach((part, i) => {
      const result = blocks[i];
      if (result?.ok && countKeysInText(part) !== countKeysInValue(items[i]))
        blocks[i] = refuse(items[i], 'A key appears twice.', batch ? `/${i}` : undefined);
    });
  }
  return { ok: true, batch, blocks };
}

function readBlock(item: unknown, pointer: string): BlockResult {
  if (typeof item !== 'object' || item === null || Array.isArray(item))
    return refuse(item, 'A block must be an object.', pointer === '' ? undefined : pointer);
  const { stream, seq, rate, time, samples, codes } = item as Record<string, unknown>;
  for (const [key, name] of [
    [stream, 'stream'],
    [seq, 'seq'],
    [samples, 'samples'],
  ] as const) {
    if (key === undefined) return refuse(item, `\`${name}\` is missing.`, `${pointer}/${name}`);
  }
  if (typeof stream !== 'string') return refuse(item, '`stream` must be a text.', pointer + '/stream');
  const wrong =
    fieldFault(streamFault(stream), pointer + '/stream') ??
    fieldFault(seqFault(numberOr(seq)), pointer + '/seq') ??
    fieldFault(rate === undefined ? undefined : rateFault(numberOr(rate)), pointer + '/rate') ??
    fieldFault(time === undefined ? undefined : timeFault(numberOr(time)), pointer + '/time') ??
    fieldFault(
      codes === undefined || typeof codes === 'boolean' ? undefined : '`codes` must be true or false.',
      pointer + '/codes',
    );
  if (wrong) return refuse(item, wrong.detail, wrong.pointer);
  const read = readSamples(samples, codes === true, pointer + '/samples');
  if (!Array.isArray(read)) {
    return read.large
      ? { ...refuse(item, '', undefined), issue: tooLarge(read.detail, read.pointer) }
      : refuse(item, read.detail, read.pointer);
  }
  const block: Block = {
    stream,
    seq: seq as number,
    rateHz: rate as number | undefined,
    timeS: time as number | undefined,
    length: read[0]!.samples.length,
    channels: read,
  };
  return { ok: true, block };
}

type Fault = { detail: string; pointer: string; large?: boolean };

function fieldFault(detail: string | undefined, pointer: string): Fault | undefined {
  return detail === undefined ? undefined : { detail, pointer };
}

function numberOr(value: unknown): number {
  return typeof value === 'number' ? value : NaN;
}

function readSamples(samples: unknown, codes: boolean, pointer: string): BlockChannel[] | Fault {
  if (typeof samples !== 'object' || samples === null || Array.isArray(samples))
    return { detail: '`samples` must be an object of arrays.', pointer };
  const names = Object.keys(samples);
  if (names.length === 0) return { detail: 'A block must hold at least one channel.', pointer };
  if (names.length > blockLimits.maxChannels)
    return { detail: `A block has at most ${blockLimits.maxChannels} channels.`, pointer, large: true };
  const channels: BlockChannel[] = [];
  for (const name of names) {
    const where = pointer + pointerPart(name);
    const fault = channelNameFault(name);
    if (fault !== undefined) return { detail: fault, pointer };
    const read = readArray((samples as Record<string, unknown>)[name], codes, where);
    if ('detail' in read) return read;
    channels.push({ name, samples: read });
    if (read.length !== channels[0]!.samples.length)
      return { detail: 'The channels of a block must have one length.', pointer: where };
  }
  return channels;
}

function readArray(values: unknown, codes: boolean, pointer: string): SampleArray | Fault {
  if (!Array.isArray(values)) return { detail: 'Samples must be an array.', pointer };
  if (values.length === 0) return { detail: 'A block must hold at least one sample.', pointer };
  if (values.length > blockLimits.maxSamplesPerChannel) {
    const detail = `A channel of one block has at most ${blockLimits.maxSamplesPerChannel} samples.`;
    return { detail, pointer, large: true };
  }
  const volts = new Float64Array(values.length);
  for (let i = 0; i < values.length; i++) {
    const value: unknown = values[i];
    if (typeof value !== 'number') return { detail: 'A sample is no number.', pointer: `${pointer}/${i}` };
    const fault = codes ? undefined : voltsFault(value);
    if (fault !== undefined) return { detail: fault, pointer: `${pointer}/${i}` };
    volts[i] = value;
  }
  if (!codes) return volts;
  const read = toCodes(volts);
  return typeof read === 'number'
    ? { detail: 'A code must be a whole number of 32 bits.', pointer: `${pointer}/${read}` }
    : read;
}

function refuse(item: unknown, detail: string, pointer: string | undefined): BlockResult & { ok: false } {
  const { stream, seq } = (typeof item === 'object' && item !== null ? item : {}) as Record<string, unknown>;
  return {
    ok: false,
    issue: invalid(detail, pointer),
    stream: typeof stream === 'string' && streamFault(stream) === undefined ? stream : undefined,
    seq: typeof seq === 'number' && seqFault(seq) === undefined ? seq : undefined,
  };
}
