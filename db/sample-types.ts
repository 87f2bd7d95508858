/** Names of the sample types as stored, and the way from a typed array to bytes and back. Bytes are little-endian. */
import type { SampleArray } from '@/signal/model';

export const sampleTypes = ['uint8', 'uint16', 'int16', 'uint32', 'int32', 'float32', 'float64'] as const;
export type SampleType = (typeof sampleTypes)[number];

const constructors = {
  uint8: Uint8Array,
  uint16: Uint16Array,
  int16: Int16Array,
  uint32: Uint32Array,
  int32: Int32Array,
  float32: Float32Array,
  float64: Float64Array,
} as const;

const typeOfConstructor = new Map<unknown, SampleType>(sampleTypes.map((type) => [constructors[type], type]));

/** Throws for an array that holds no samples (a programmer's error). */
export function sampleTypeOf(samples: SampleArray): SampleType {
  const type =
    typeOfConstructor.get(samples.constructor) ?? (samples instanceof Uint8Array ? 'uint8' : undefined);
  if (type === undefined) throw new TypeError(`sampleTypeOf: ${samples.constructor.name} is no sample array`);
  return type;
}

export function bytesPerSample(type: SampleType): number {
  return constructors[type].BYTES_PER_ELEMENT;
}

/** Integer types hold ADC codes, float types volts. */
export function holdsCodes(type: SampleType): boolean {
  return type !== 'float32' && type !== 'float64';
}

export function newSampleArray(type: SampleType, length: number): SampleArray {
  return new constructors[type](length);
}

/** The bytes of the samples, as a view. */
export function bytesOf(samples: SampleArray): Uint8Array {
  return new Uint8Array(samples.buffer, samples.byteOffset, samples.byteLength);
}

/** `count` samples that begin at `byteOffset` of `bytes`: a view where the alignment allows it, else a copy. */
export function samplesAt(
  bytes: Uint8Array,
  byteOffset: number,
  type: SampleType,
  count: number,
): SampleArray {
  const size = bytesPerSample(type);
  if (byteOffset + count * size > bytes.byteLength) {
    throw new RangeError(
      `samplesAt: ${count} ${type} at byte ${byteOffset} do not fit in ${bytes.byteLength} bytes`,
    );
  }
  const start = bytes.byteOffset + byteOffset;
  if (start % size === 0) return new constructors[type](bytes.buffer as ArrayBuffer, start, count);
  // Not `slice`: that of a Buffer is another view.
  const copy = new Uint8Array(count * size);
  copy.set(bytes.subarray(byteOffset, byteOffset + copy.length));
  return new constructors[type](copy.buffer, 0, count);
}
