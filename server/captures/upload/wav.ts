/** WAV as a recording: integers are codes, floats are volts; its channels are the rig's, in the rig's order. */
import type { SampleArray } from '@/signal/model';
import { blockLimits } from '@/ingest/block';
import { voltsFault } from '@/ingest/decoders/fields';
import { createTurns } from '../turns';
import { refused, unreadable } from './upload';
import type { UploadResult } from './upload';

type Format = { tag: number; channels: number; rateHz: number; frameBytes: number; bits: number };

const framesAtOnce = 65_536;

function formatOf(view: DataView, at: number, size: number): Format {
  const tag = view.getUint16(at, true);
  return {
    // The extensible kind carries the real one at the start of its sub-format.
    tag: tag === 0xfffe && size >= 26 ? view.getUint16(at + 24, true) : tag,
    channels: view.getUint16(at + 2, true),
    rateHz: view.getUint32(at + 4, true),
    frameBytes: view.getUint16(at + 12, true),
    bits: view.getUint16(at + 14, true),
  };
}

type Reader = { make(length: number): SampleArray; read(view: DataView, at: number): number };

const readers: Record<string, Reader> = {
  '1/8': { make: (n) => new Uint8Array(n), read: (view, at) => view.getUint8(at) },
  '1/16': { make: (n) => new Int16Array(n), read: (view, at) => view.getInt16(at, true) },
  '1/24': {
    make: (n) => new Int32Array(n),
    read: (view, at) => (view.getInt8(at + 2) << 16) | view.getUint16(at, true),
  },
  '1/32': { make: (n) => new Int32Array(n), read: (view, at) => view.getInt32(at, true) },
  '3/32': { make: (n) => new Float32Array(n), read: (view, at) => view.getFloat32(at, true) },
  '3/64': { make: (n) => new Float64Array(n), read: (view, at) => view.getFloat64(at, true) },
};

/** Finds `fmt ` and `data`; other chunks are passed over. */
function findChunks(
  bytes: Uint8Array,
  view: DataView,
): { format?: Format; dataAt: number; dataBytes: number } {
  let format: Format | undefined;
  for (let at = 12; at + 8 <= bytes.byteLength;) {
    const name = String.fromCharCode(...bytes.subarray(at, at + 4));
    const size = view.getUint32(at + 4, true);
    const start = at + 8;
    if (name === 'fmt ' && size >= 16 && start + size <= bytes.byteLength)
      format = formatOf(view, start, size);
    if (name === 'data') {
      // A writer that could not go back leaves the largest number: then it is all that follows.
      const dataBytes = size === 0xffffffff ? bytes.byteLength - start : size;
      return { format, dataAt: start, dataBytes };
    }
    at = start + size + (size % 2);
  }
  return { format, dataAt: -1, dataBytes: 0 };
}

export async function readWav(bytes: Uint8Array, rigChannels: readonly string[]): Promise<UploadResult> {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const { format, dataAt, dataBytes } = findChunks(bytes, view);
  if (format === undefined || dataAt < 0) return unreadable('The WAV file lacks its format or its data.');
  if (dataAt + dataBytes > bytes.byteLength) return unreadable('The WAV file ends before its data does.');
  const { tag, channels: count, rateHz, frameBytes, bits } = format;
  const reader = readers[`${tag}/${bits}`];
  if (reader === undefined) {
    return refused(
      `WAV files hold integers of 8, 16, 24 or 32 bits or floats of 32 or 64; this is type ${tag} with ${bits}.`,
    );
  }
  if (count < 1 || count > rigChannels.length) {
    return refused(`The file has ${count} channels, the rig ${rigChannels.length}.`);
  }
  if (frameBytes !== (count * bits) / 8)
    return unreadable('The WAV file contradicts itself about its frames.');
  if (rateHz < blockLimits.minRateHz || rateHz > blockLimits.maxRateHz) {
    return refused(`The rate must be from 1 Hz to 1 MHz; it is ${rateHz} Hz.`);
  }
  const length = Math.floor(dataBytes / frameBytes);
  if (length === 0) return refused('The file holds no sample.');
  const channels = rigChannels.slice(0, count);

  function* pieces() {
    for (let from = 0; from < length; from += framesAtOnce) {
      const frames = Math.min(framesAtOnce, length - from);
      const arrays = channels.map((_, c) => {
        const samples = reader!.make(frames);
        for (let i = 0; i < frames; i++) {
          samples[i] = reader!.read(view, dataAt + (from + i) * frameBytes + (c * bits) / 8);
        }
        return samples;
      });
      yield {
        startIndex: from,
        count: frames,
        channels: arrays.map((samples, c) => ({ name: channels[c]!, samples })),
      };
    }
  }

  if (tag === 3) {
    const turn = createTurns();
    for (const piece of pieces()) {
      await turn();
      for (const { name, samples } of piece.channels) {
        const bad = samples.findIndex((v) => voltsFault(v) !== undefined);
        if (bad >= 0)
          return refused(`Sample ${piece.startIndex + bad} of channel ${name}: ${voltsFault(samples[bad]!)}`);
      }
    }
  }
  return {
    ok: true,
    upload: {
      rateHz,
      channels,
      stream: 'upload',
      startedAtS: undefined,
      gaps: [],
      lengthSamples: length,
      pieces,
    },
  };
}
