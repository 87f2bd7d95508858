/**
 * The arrays of a block in CBOR: typed arrays of RFC 8746 and plain arrays of numbers. A typed array in the machine's own
 * byte order becomes a view on the message where it is aligned there, else a copy.
 */
import type { SampleArray } from '@/signal/model';
import { blockLimits } from '../block';
import { indefinite } from './cbor-reader';
import type { CborReader } from './cbor-reader';
import { CborFault } from './cbor-values';
import { firstNoVolts32, firstNoVolts64, voltsFault } from './fields';

const littleEndianHost = new Uint8Array(new Uint16Array([1]).buffer)[0] === 1;
const maxSamples = blockLimits.maxSamplesPerChannel;

type Kind = 'uint8' | 'uint16' | 'sint16' | 'uint32' | 'sint32' | 'float32' | 'float64';
type TagKind = { kind: Kind; size: number; littleEndian: boolean };

/** RFC 8746 section 2.1, the tags that the ingest format takes. */
const tagKinds: (TagKind | undefined)[] = [];
function takes(tag: number, kind: Kind, size: number, littleEndian: boolean): void {
  tagKinds[tag] = { kind, size, littleEndian };
}
takes(64, 'uint8', 1, littleEndianHost);
takes(65, 'uint16', 2, false);
takes(66, 'uint32', 4, false);
takes(69, 'uint16', 2, true);
takes(70, 'uint32', 4, true);
takes(73, 'sint16', 2, false);
takes(74, 'sint32', 4, false);
takes(77, 'sint16', 2, true);
takes(78, 'sint32', 4, true);
takes(81, 'float32', 4, false);
takes(82, 'float64', 8, false);
takes(85, 'float32', 4, true);
takes(86, 'float64', 8, true);

/** Reads the array whose tag was just read; `pointer` names it. Throws a `CborFault`. */
export function readTypedArray(reader: CborReader, pointer: string): SampleArray {
  const at = reader.pos;
  const tag = reader.arg;
  const kind = tagKinds[tag];
  if (kind === undefined) {
    throw new CborFault('invalid', `Tag ${tag} is not one of the sample arrays.`, at, pointer);
  }
  reader.head();
  if (reader.major !== 2) {
    throw new CborFault('invalid', `Tag ${tag} must stand before a byte string.`, at, pointer);
  }
  const chunked = reader.arg === indefinite ? reader.byteString() : undefined;
  const bytes = chunked ?? reader.bytes;
  const byteLength = chunked ? chunked.length : reader.arg;
  const start = chunked ? 0 : reader.content(byteLength);
  const length = byteLength / kind.size;
  if (!Number.isInteger(length)) {
    const detail = `${byteLength} bytes are no whole number of ${kind.kind} samples.`;
    throw new CborFault('invalid', detail, at, pointer);
  }
  if (length > maxSamples) throw tooMany(at, pointer);
  const offset = bytes.byteOffset + start;
  const swap = kind.littleEndian !== littleEndianHost;
  if (!swap && offset % kind.size === 0) return toSamples(kind, bytes.buffer, offset, length, at, pointer);
  // A small buffer comes from Node's pool, aligned to 8 bytes: far cheaper than an ArrayBuffer of its own.
  const copy = Buffer.allocUnsafe(byteLength);
  copy.set(bytes.subarray(start, start + byteLength));
  if (swap) swapBytes(copy, kind.size);
  return toSamples(kind, copy.buffer, copy.byteOffset, length, at, pointer);
}

function toSamples(
  kind: TagKind,
  buffer: ArrayBufferLike,
  offset: number,
  length: number,
  at: number,
  pointer: string,
): SampleArray {
  switch (kind.kind) {
    case 'uint8':
      return new Uint8Array(buffer, offset, length);
    case 'uint16':
      return new Uint16Array(buffer, offset, length);
    case 'sint16':
      return new Int16Array(buffer, offset, length);
    case 'uint32':
      return new Uint32Array(buffer, offset, length);
    case 'sint32':
      return new Int32Array(buffer, offset, length);
    case 'float32': {
      const samples = new Float32Array(buffer, offset, length);
      refuseNoVolts(samples, firstNoVolts32(samples), at, pointer);
      return samples;
    }
    case 'float64': {
      const samples = new Float64Array(buffer, offset, length);
      refuseNoVolts(samples, firstNoVolts64(samples), at, pointer);
      return samples;
    }
  }
}

/** Reverses the bytes of each element, in place. */
function swapBytes(content: Uint8Array, size: number): void {
  for (let first = 0; first < content.length; first += size) {
    for (let i = first, j = first + size - 1; i < j; i++, j--) {
      const byte = content[i]!;
      content[i] = content[j]!;
      content[j] = byte;
    }
  }
}

/**
 * Reads a plain array of finite numbers whose head was just read: volts or codes, which the block says, perhaps later.
 * Throws a `CborFault`.
 */
export function readPlainArray(reader: CborReader, pointer: string): Float64Array {
  const at = reader.pos;
  const count = reader.arg;
  if (count === indefinite) return readOpenArray(reader, pointer);
  reader.checkCount(count);
  if (count > maxSamples) throw tooMany(at, pointer);
  const samples = new Float64Array(count);
  for (let i = 0; i < count; i++) samples[i] = readSample(reader, i, pointer);
  return samples;
}

function readOpenArray(reader: CborReader, pointer: string): Float64Array {
  const samples: number[] = [];
  while (!reader.takeBreak()) {
    if (samples.length >= maxSamples) throw tooMany(reader.pos, pointer);
    samples.push(readSample(reader, samples.length, pointer));
  }
  return Float64Array.from(samples);
}

function readSample(reader: CborReader, index: number, pointer: string): number {
  const at = reader.pos;
  reader.head();
  const sample = reader.number();
  if (sample === undefined)
    throw new CborFault('invalid', 'A sample is no number.', at, `${pointer}/${index}`);
  if (sample - sample !== 0) throw new CborFault('invalid', voltsFault(sample)!, at, `${pointer}/${index}`);
  return sample;
}

/** Throws a `CborFault` where `index` names a sample; -1 names none. */
export function refuseNoVolts(
  samples: Float32Array | Float64Array,
  index: number,
  at: number,
  pointer: string,
): void {
  if (index < 0) return;
  throw new CborFault('invalid', voltsFault(samples[index]!)!, at, `${pointer}/${index}`);
}

function tooMany(at: number, pointer: string): CborFault {
  return new CborFault('too-large', `A channel of one block has at most ${maxSamples} samples.`, at, pointer);
}
