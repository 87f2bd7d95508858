/**
 * Samples as byte planes: byte 0 of every sample, then byte 1, and so on; a general compressor finds far more in them.
 * With `delta`, each word is first replaced by its difference from the one before (of the same half, for 8-byte
 * samples), zigzag coded so that small differences of either sign have zero high bytes. Works on the bit patterns, so
 * it is exact for every type: integers modulo 2^bits, floats bit for bit.
 */
import { bytesOf, bytesPerSample, newSampleArray, sampleTypeOf } from '../sample-types';
import type { SampleType } from '../sample-types';
import type { SampleArray } from '@/signal/model';

type Words = Uint8Array | Uint16Array | Uint32Array;

export function toBytePlanes(samples: SampleArray, delta: boolean): Uint8Array {
  const bytes = bytesOf(delta ? differences(samples) : samples);
  const count = samples.length;
  const size = bytes.length / count;
  const planes = new Uint8Array(bytes.length);
  for (let b = 0; b < size; b++) {
    const base = b * count;
    for (let i = 0, from = b; i < count; i++, from += size) planes[base + i] = bytes[from]!;
  }
  return planes;
}

/** Throws where the planes do not hold `count` samples of the type. */
export function fromBytePlanes(
  planes: Uint8Array,
  type: SampleType,
  count: number,
  delta: boolean,
): SampleArray {
  const size = bytesPerSample(type);
  if (planes.length !== count * size) {
    throw new RangeError(`fromBytePlanes: ${planes.length} bytes are not ${count} samples of ${type}`);
  }
  const samples = newSampleArray(type, count);
  const bytes = bytesOf(samples);
  for (let b = 0; b < size; b++) {
    const base = b * count;
    for (let i = 0, to = b; i < count; i++, to += size) bytes[to] = planes[base + i]!;
  }
  if (delta) sumUp(samples);
  return samples;
}

function differences(samples: SampleArray): SampleArray {
  const coded = newSampleArray(sampleTypeOf(samples), samples.length);
  const { words, lanes, bits } = wordsOf(samples);
  const out = wordsOf(coded).words;
  const shift = 32 - bits;
  for (let lane = 0; lane < lanes; lane++) {
    let before = 0;
    for (let i = lane; i < words.length; i += lanes) {
      const word = words[i]!;
      const difference = ((word - before) << shift) >> shift;
      out[i] = (difference << 1) ^ (difference >> 31);
      before = word;
    }
  }
  return coded;
}

/** The inverse of `differences`, in place. */
function sumUp(samples: SampleArray): void {
  const { words, lanes } = wordsOf(samples);
  for (let lane = 0; lane < lanes; lane++) {
    let sum = 0;
    for (let i = lane; i < words.length; i += lanes) {
      const coded = words[i]!;
      // Modulo 2^32 here; the array cuts it to the word's own bits.
      sum = (sum + ((coded >>> 1) ^ -(coded & 1))) | 0;
      words[i] = sum;
    }
  }
}

/** The bit patterns; 8-byte samples as two interleaved lanes. */
function wordsOf(samples: SampleArray): { words: Words; lanes: 1 | 2; bits: 8 | 16 | 32 } {
  const { buffer, byteOffset, length } = samples;
  switch (bytesPerSample(sampleTypeOf(samples))) {
    case 1:
      return { words: new Uint8Array(buffer, byteOffset, length), lanes: 1, bits: 8 };
    case 2:
      return { words: new Uint16Array(buffer, byteOffset, length), lanes: 1, bits: 16 };
    case 4:
      return { words: new Uint32Array(buffer, byteOffset, length), lanes: 1, bits: 32 };
    default:
      return { words: new Uint32Array(buffer, byteOffset, 2 * length), lanes: 2, bits: 32 };
  }
}
