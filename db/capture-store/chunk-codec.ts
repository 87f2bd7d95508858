/**
 * Lossless compression of chunks: byte planes and brotli at quality 1, in the thread pool. Measured on such signals:
 * several times faster than gzip 1 and smaller.
 */
import { promisify } from 'node:util';
import { brotliCompress, brotliDecompress, constants } from 'node:zlib';
import { bytesOf, samplesAt } from '../sample-types';
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
    return best.data.length < samples.byteLength ? best : { codec: codecs.bytes, data: bytesOf(samples) };
  }
}

/** The samples of a chunk, bit for bit. Throws where the data are damaged. */
export async function decodeChunk(
  chunk: { codec: number; data: Uint8Array },
  type: SampleType,
  count: number,
): Promise<SampleArray> {
  switch (chunk.codec) {
    case codecs.bytes:
      return samplesAt(chunk.data, 0, type, count);
    case codecs.planes:
    case codecs.deltaPlanes: {
      const planes = await decompress(chunk.data);
      return fromBytePlanes(planes, type, count, chunk.codec === codecs.deltaPlanes);
    }
    default:
      throw new Error(`decodeChunk: codec ${chunk.codec} is unknown`);
  }
}

async function pack(
  samples: SampleArray,
  codec: typeof codecs.planes | typeof codecs.deltaPlanes,
): Promise<EncodedChunk> {
  const planes = toBytePlanes(samples, codec === codecs.deltaPlanes);
  const data = await compress(planes, {
    params: {
      [constants.BROTLI_PARAM_QUALITY]: 1,
      [constants.BROTLI_PARAM_SIZE_HINT]: planes.length,
    },
  });
  return { codec, data };
}
