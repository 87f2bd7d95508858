/**
 * Lossless compression of chunks: byte planes and brotli at quality 1, in the thread pool. Measured on such signals:
 * several times faster than gzip 1 and smaller. The stored bytes begin with the CRC-32 of the samples (little-endian),
 * since neither brotli nor SQLite would notice a flipped bit.
 */
import { promisify } from 'node:util';
import { brotliCompress, brotliDecompress, constants, crc32 } from 'node:zlib';
import { bytesOf, bytesPerSample, samplesAt } from '../sample-types';
import type { SampleType } from '../sample-types';
import { fromBytePlanes, toBytePlanes } from './byte-planes';
import type { SampleArray } from '@/signal/model';

/** Stored with each chunk. Numbers are for ever. */
export const codecs = { bytes: 0, planes: 1, deltaPlanes: 2 } as const;
export type Codec = (typeof codecs)[keyof typeof codecs];
export type EncodedChunk = { codec: Codec; data: Uint8Array };

const compress = promisify(brotliCompress);
const decompress = promisify(brotliDecompress);

/**
 * Encodes the chunks of one channel of one type. The first chunk is tried both plain and as differences, the smaller
 * way is used from then on; a chunk that does not get smaller is stored as it is.
 */
export class ChunkEncoder {
  #way: typeof codecs.planes | typeof codecs.deltaPlanes | null = null;

  async encode(samples: SampleArray): Promise<EncodedChunk> {
    let best: EncodedChunk;
    if (this.#way === null) {
      const plain = await pack(samples, codecs.planes);
      const delta = await pack(samples, codecs.deltaPlanes);
      best = delta.data.length < plain.data.length ? delta : plain;
      this.#way = best.codec === codecs.deltaPlanes ? codecs.deltaPlanes : codecs.planes;
    } else {
      best = await pack(samples, this.#way);
    }
    const raw = bytesOf(samples);
    const smaller = best.data.length < raw.length ? best : { codec: codecs.bytes, data: raw };
    return { codec: smaller.codec, data: withCrc(smaller.data, crc32(raw)) };
  }
}

/** The samples of a chunk, bit for bit. Throws where the data are damaged. */
export async function decodeChunk(
  chunk: { codec: number; data: Uint8Array },
  type: SampleType,
  count: number,
): Promise<SampleArray> {
  const { crc, payload } = splitCrc(chunk.data);
  const samples = await unpack(chunk.codec, payload, type, count);
  if (crc32(bytesOf(samples)) !== crc) throw new Error('decodeChunk: the stored samples are damaged');
  return samples;
}

async function unpack(
  codec: number,
  payload: Uint8Array,
  type: SampleType,
  count: number,
): Promise<SampleArray> {
  switch (codec) {
    case codecs.bytes:
      return samplesAt(payload, 0, type, count);
    case codecs.planes:
    case codecs.deltaPlanes:
      return fromBytePlanes(
        await decompress(payload, { maxOutputLength: count * bytesPerSample(type) }),
        type,
        count,
        codec === codecs.deltaPlanes,
      );
    default:
      throw new Error(`decodeChunk: codec ${codec} is unknown`);
  }
}

const crcBytes = 4;

function withCrc(payload: Uint8Array, crc: number): Uint8Array {
  const data = new Uint8Array(crcBytes + payload.length);
  new DataView(data.buffer).setUint32(0, crc, true);
  data.set(payload, crcBytes);
  return data;
}

function splitCrc(data: Uint8Array): { crc: number; payload: Uint8Array } {
  if (data.length < crcBytes) throw new Error('decodeChunk: the stored samples are damaged');
  const crc = new DataView(data.buffer, data.byteOffset, crcBytes).getUint32(0, true);
  return { crc, payload: data.subarray(crcBytes) };
}

async function pack(
  samples: SampleArray,
  codec: typeof codecs.planes | typeof codecs.deltaPlanes,
): Promise<EncodedChunk> {
  const planes = toBytePlanes(samples, codec === codecs.deltaPlanes);
  const data = await compress(planes, {
    params: {
      [constants.BROTLI_PARAM_QUALITY]: 1,
      // Larger windows cost their set-up and find nothing more in a chunk.
      [constants.BROTLI_PARAM_LGWIN]: 18,
      [constants.BROTLI_PARAM_SIZE_HINT]: planes.length,
    },
  });
  return { codec, data };
}
