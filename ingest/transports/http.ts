/**
 * `POST /ingest/v1/samples`, without the web server: a request as plain values in, a response as plain values out. The
 * caller has checked the rig key.
 */
import { blockLimits } from '../block';
import { decodeCbor } from '../decoders/cbor';
import { decodeJson } from '../decoders/json';
import { answerMessage } from './http-message';
import { answerRecording } from './http-recording';
import { headerOf, refusal } from './http-types';
import type { HttpIngestParts, IngestRequest, IngestResponse } from './http-types';
import { problem } from './problem';

export type HttpIngest = {
  handle(request: IngestRequest): Promise<IngestResponse>;
  /** What to answer before reading a body of `bytes`; undefined where it may be read. */
  refuseEarly(rigId: string, contentType: string | undefined, bytes: number): IngestResponse | undefined;
};

type MediaType = 'cbor' | 'json' | 'csv' | 'senml-json' | 'senml-cbor';
const mediaTypes: Record<string, MediaType> = {
  'application/cbor': 'cbor',
  'application/json': 'json',
  'text/csv': 'csv',
  'application/senml+json': 'senml-json',
  'application/senml+cbor': 'senml-cbor',
};

/** The format that a `Content-Type` names; a charset other than UTF-8 is none of ours. */
function mediaTypeOf(contentType: string | undefined): MediaType | undefined {
  const [name = '', ...parameters] = (contentType ?? '').split(';').map((part) => part.trim().toLowerCase());
  const charset = parameters
    .find((part) => part.startsWith('charset='))
    ?.slice(8)
    .replaceAll('"', '');
  if (charset !== undefined && !['utf-8', 'utf8', 'us-ascii'].includes(charset)) return undefined;
  return Object.hasOwn(mediaTypes, name) ? mediaTypes[name] : undefined;
}

/** The largest body of a content type, in bytes; the largest of all where the type is unknown. */
export function bodyLimit(contentType: string | undefined): number {
  const type = mediaTypeOf(contentType);
  return type === 'cbor' || type === 'json' ? blockLimits.maxMessageBytes : blockLimits.maxBodyBytes;
}

export function createHttpIngest(parts: HttpIngestParts): HttpIngest {
  const { maxRigBytes = 8 * 1024 * 1024, maxBytes = 128 * 1024 * 1024 } = parts;
  const rigBytes = new Map<string, number>();
  const running = new Map<string, Promise<unknown>>();
  let allBytes = 0;

  function refuseEarly(
    rigId: string,
    contentType: string | undefined,
    bytes: number,
  ): IngestResponse | undefined {
    if (mediaTypeOf(contentType) === undefined) {
      const known = Object.keys(mediaTypes).join(', ');
      return refusal(problem('content-type', 415, `The Content-Type must be one of ${known}.`));
    }
    const limit = bodyLimit(contentType);
    if (bytes > limit)
      return refusal(problem('too-large', 413, `A body of this type has at most ${limit} bytes.`));
    const mine = rigBytes.get(rigId) ?? 0;
    const crowded = (mine > 0 && mine + bytes > maxRigBytes) || (allBytes > 0 && allBytes + bytes > maxBytes);
    if (!crowded) return undefined;
    const detail = 'Earlier samples are still being stored. Send this again a little later.';
    return refusal(problem('too-fast', 429, detail), { 'retry-after': '1' });
  }

  async function handle(request: IngestRequest): Promise<IngestResponse> {
    const { rigId, body } = request;
    const contentType = headerOf(request, 'content-type');
    const early = refuseEarly(rigId, contentType, body.byteLength);
    if (early) return early;
    const bytes = body.byteLength;
    allBytes += bytes;
    rigBytes.set(rigId, (rigBytes.get(rigId) ?? 0) + bytes);
    try {
      const type = mediaTypeOf(contentType);
      if (type === 'cbor') return await answerMessage(parts.sink, rigId, decodeCbor(body));
      if (type === 'json') return await answerMessage(parts.sink, rigId, decodeJson(body));
      return await answerRecording(
        parts,
        running,
        request,
        type === 'csv' ? 'csv' : type === 'senml-json' ? 'json' : 'cbor',
      );
    } finally {
      allBytes -= bytes;
      const left = (rigBytes.get(rigId) ?? 0) - bytes;
      if (left > 0) rigBytes.set(rigId, left);
      else rigBytes.delete(rigId);
    }
  }

  return { handle, refuseEarly };
}
