/**
 * Samples as byte planes: byte 0 of every sample, then byte 1, and so on; a general compressor finds far more in them.
 * With `delta`, each word is first replaced by its difference from the one before (of the same half, for 8-byte
 * samples), zigzag coded so that small differences of either sign have zero high bytes. Works on the bit patterns, so
 * it is exact for every type: integers modulo 2^bits, floats bit for bit.
 */
import { bytesPerSample, newSampleArray, sampleTypeOf } from '../sample-types';
import type { SampleType } from '../sample-types';
import type { SampleArray } from '@/signal/model';

type Words = Uint8Array | Uint16Array | Uint32Array;

export function toBytePlanes(samples: SampleArray, delta: boolean): Uint8Array {
  const { words, lanes, bytes } = wordsOf(samples);
  const count = samples.length;
  const planes = new Uint8Array(samples.byteLength);
  const shift = 32 - 8 * bytes;
  for (let lane = 0; lane < lanes; lane++) {
    const base = lane * bytes * count;
    let before = 0;
    for (let i = 0; i < count; i++) {
      const word = words[i * lanes + lane]!;
      let coded = word;
      if (delta) {
        const difference = ((word - before) << shift) >> shift;
        coded = (difference << 1) ^ (difference >> 31);
        before = word;
      }
      for (let b = 0; b < bytes; b++) planes[base + b * count + i] = coded >>> (8 * b);
    }
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
  if (planes.length !== count * bytesPerSample(type)) {
    throw new RangeError(`fromBytePlanes: ${planes.length} bytes are not ${count} samples of ${type}`);
  }
  const samples = newSampleArray(type, count);
  const { words, lanes, bytes } = wordsOf(samples);
  for (let lane = 0; lane < lanes; lane++) {
    const base = lane * bytes * count;
    let before = 0;
    for (let i = 0; i < count; i++) {
      let coded = 0;
      for (let b = 0; b < bytes; b++) coded |= planes[base + b * count + i]! << (8 * b);
      if (delta) {
        // The word array cuts the sum to its bits; the carried value must stay exact, hence the int32 sum.
        before = (before + ((coded >>> 1) ^ -(coded & 1))) | 0;
        coded = before;
      }
      words[i * lanes + lane] = coded;
    }
  }
  return samples;
}

function wordsOf(samples: SampleArray): { words: Words; lanes: number; bytes: number } {
  const { buffer, byteOffset, length } = samples;
  switch (bytesPerSample(sampleTypeOf(samples))) {
    case 1:
      return { words: new Uint8Array(buffer, byteOffset, length), lanes: 1, bytes: 1 };
    case 2:
      return { words: new Uint16Array(buffer, byteOffset, length), lanes: 1, bytes: 2 };
    case 4:
      return { words: new Uint32Array(buffer, byteOffset, length), lanes: 1, bytes: 4 };
    default:
      return { words: new Uint32Array(buffer, byteOffset, 2 * length), lanes: 2, bytes: 4 };
  }
}
