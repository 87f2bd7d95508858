/** A capture as WAV: integer codes or float volts. It has no place for gaps, fractions of a hertz, or both kinds at once. */
import type { CaptureRecord, CaptureStore } from '@/db';
import type { Result, SampleArray } from '@/signal/model';
import { holdsCodes } from '@/signal/scale';
import { captureStretches } from '../stretches';

type WavKind = { tag: 1 | 3; bits: 8 | 16 | 32 | 64 };
const headerBytes = 44;
const maxBytes = 2 ** 32 - 1;

/** Which kind holds everything, or why none does. Reads the samples through once. */
export async function wavKindOf(
  store: CaptureStore,
  capture: CaptureRecord,
): Promise<Result<WavKind, string>> {
  const { rateHz, channels, lengthSamples } = capture;
  if (!Number.isInteger(rateHz)) {
    return { ok: false, issue: `WAV holds whole numbers of samples a second only; this has ${rateHz}.` };
  }
  if ((await store.gaps(capture.id)).length > 0) {
    return {
      ok: false,
      issue: 'WAV has no place for gaps, and this capture has lost samples. CBOR and JSON hold them.',
    };
  }
  let codes = 0;
  let volts = 0;
  let lowest = 0;
  let highest = 0;
  let float64 = false;
  let onlyBytes = true;
  for await (const stretch of captureStretches(store, capture, channels)) {
    if (stretch.kind === 'gap') continue;
    for (const array of stretch.arrays) {
      float64 ||= array instanceof Float64Array;
      onlyBytes &&= array instanceof Uint8Array;
      if (!holdsCodes(array)) {
        volts += 1;
        continue;
      }
      codes += 1;
      for (const code of array) {
        if (code < lowest) lowest = code;
        else if (code > highest) highest = code;
      }
    }
  }
  if (codes > 0 && volts > 0) {
    return { ok: false, issue: 'Some of its samples are codes and others volts; a WAV file holds one kind.' };
  }
  if (highest > 2 ** 31 - 1)
    return { ok: false, issue: 'WAV holds codes up to 2147483647; some here are larger.' };
  const small = lowest >= -32_768 && highest <= 32_767;
  const kind: WavKind =
    volts > 0 ? { tag: 3, bits: float64 ? 64 : 32 } : { tag: 1, bits: onlyBytes ? 8 : small ? 16 : 32 };
  const bytes = headerBytes + lengthSamples * channels.length * (kind.bits / 8);
  if (bytes > maxBytes) return { ok: false, issue: 'WAV holds 4 GiB; this capture is longer.' };
  return { ok: true, value: kind };
}

function header({ tag, bits }: WavKind, channels: number, rateHz: number, frames: number): Uint8Array {
  const bytes = Buffer.alloc(headerBytes);
  const frameBytes = (channels * bits) / 8;
  const dataBytes = frames * frameBytes;
  bytes.write('RIFF', 0);
  bytes.writeUInt32LE(headerBytes - 8 + dataBytes + (dataBytes % 2), 4);
  bytes.write('WAVEfmt ', 8);
  bytes.writeUInt32LE(16, 16);
  bytes.writeUInt16LE(tag, 20);
  bytes.writeUInt16LE(channels, 22);
  bytes.writeUInt32LE(rateHz, 24);
  bytes.writeUInt32LE(rateHz * frameBytes, 28);
  bytes.writeUInt16LE(frameBytes, 32);
  bytes.writeUInt16LE(bits, 34);
  bytes.write('data', 36);
  bytes.writeUInt32LE(dataBytes, 40);
  return bytes;
}

function frameArray({ tag, bits }: WavKind, length: number): SampleArray {
  if (tag === 3) return bits === 64 ? new Float64Array(length) : new Float32Array(length);
  return bits === 8 ? new Uint8Array(length) : bits === 16 ? new Int16Array(length) : new Int32Array(length);
}

/** `kind` is what `wavKindOf` found. */
export async function* wavFile(
  store: CaptureStore,
  capture: CaptureRecord,
  kind: WavKind,
): AsyncGenerator<Uint8Array> {
  const { channels, rateHz, lengthSamples } = capture;
  yield header(kind, channels.length, rateHz, lengthSamples);
  for await (const stretch of captureStretches(store, capture, channels)) {
    if (stretch.kind === 'gap') continue;
    const frames = frameArray(kind, stretch.count * channels.length);
    stretch.arrays.forEach((array, c) => {
      for (let i = 0; i < stretch.count; i++) frames[i * channels.length + c] = array[i]!;
    });
    yield new Uint8Array(frames.buffer, frames.byteOffset, frames.byteLength);
  }
  if ((lengthSamples * channels.length * kind.bits) % 16 === 8) yield new Uint8Array(1);
}
