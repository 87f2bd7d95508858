/** The boards' own paths, for the document. What they mean in full is on the Connect page of each rig. */
import type { RouteConfig } from '@asteasolutions/zod-to-openapi';
import { z } from 'zod';
import { problem } from '@/server/contract';

const seq = z.number().int().min(0).max(4_294_967_295);

const block = z
  .object({
    stream: z.string().min(1).max(64).meta({ description: 'Names this run of the board; new at each boot' }),
    seq: seq.meta({ description: '+1 for each block of the stream' }),
    rate: z.number().min(1).max(1_000_000).optional().meta({
      description: 'Samples per second of each channel; needed in the first block of a stream',
    }),
    time: z.number().optional().meta({ description: 'The board’s own clock at the first sample, s' }),
    samples: z.record(z.string(), z.array(z.number())).meta({
      description:
        'Channel name to samples, all of one length: volts within ±1,000,000, or codes where `codes` is true',
    }),
    codes: z.boolean().optional(),
  })
  .meta({ id: 'Block' });

const accepted = z
  .object({ stream: z.string(), seq, accepted: z.number().int(), duplicates: z.number().int() })
  .meta({ id: 'IngestAccepted' });

const refused = (description: string) => ({
  description,
  content: { 'application/problem+json': { schema: problem } },
});
const blocks = z.union([block, z.array(block)]);
const text = z.string();

export const ingestPaths: RouteConfig[] = [
  {
    method: 'post',
    path: '/ingest/v1/samples',
    tags: ['Ingest'],
    summary: 'Send samples',
    description:
      'One block or a batch (CBOR, JSON: 1 MiB), a CSV table or a SenML pack (64 MiB). In CBOR, samples are typed arrays ' +
      '(RFC 8746): integers are codes, floats are volts. Volts lie within ±1,000,000 V: NaN, infinity and what no input of a board can ' +
      'have is refused (422), naming the sample. What is answered for is stored. Sending again is always safe.',
    security: [{ rigKey: [] }],
    request: {
      headers: z.object({
        'Turnmark-Stream': z
          .string()
          .optional()
          .meta({ description: 'CSV: the stream; without it a new one is opened' }),
        'Turnmark-Seq': z.string().optional().meta({ description: 'CSV: number of the first block' }),
        'Turnmark-Rate': z.string().optional().meta({ description: 'CSV: samples per second' }),
        'Idempotency-Key': z
          .string()
          .optional()
          .meta({ description: 'SenML: makes a repeated request harmless, 24 h' }),
      }),
      query: z.object({
        codes: z.literal('1').optional().meta({ description: 'CSV: the columns hold codes' }),
      }),
      body: {
        required: true,
        content: {
          'application/json': { schema: blocks },
          'application/cbor': { schema: blocks },
          'text/csv': { schema: text },
          'application/senml+json': { schema: z.array(z.record(z.string(), z.unknown())) },
          'application/senml+cbor': { schema: text },
        },
      },
    },
    responses: {
      202: { description: 'Stored', content: { 'application/json': { schema: accepted } } },
      400: refused('`unreadable`'),
      401: refused('`no-key`'),
      403: refused('`key-revoked`'),
      413: refused('`too-large`'),
      415: refused('`content-type`'),
      422: refused('`invalid`, `stream-changed`, `too-late`; in a batch `blocks` tells of each block'),
      429: refused('`too-fast`, with Retry-After'),
      503: refused('`spool-unavailable`'),
    },
  },
  {
    method: 'get',
    path: '/ingest/v1/stream',
    tags: ['Ingest'],
    summary: 'Send samples over a WebSocket',
    description:
      'An upgrade. Text messages are JSON, binary ones CBOR; each is a block or a batch. The hub answers with ' +
      '`{"ack": {"stream", "seq"}}` once everything up to `seq` is stored, and with `{"problem": …}`. A client that cannot ' +
      'set headers offers the subprotocols `turnmark.v1, bearer.<rig key>`. Close codes: 4403 key revoked, 4408 silent ' +
      'for 60 s, 1009 message too large, 1013 the hub is stopping.',
    security: [{ rigKey: [] }],
    responses: {
      101: { description: 'Switched to the WebSocket' },
      401: refused('`no-key`'),
      403: refused('`key-revoked`'),
    },
  },
  {
    method: 'get',
    path: '/live/v1',
    tags: ['Live'],
    summary: 'Live frames over a WebSocket',
    description:
      'An upgrade; Origin is checked. The first message, within 5 s, is `{"type": "hello", "accessToken"}`; then ' +
      '`{"type": "watch", "rigs": […]}`. Needs the role reviewer. Close code 4401: not, or no longer, signed in.',
    responses: { 101: { description: 'Switched to the WebSocket' }, 403: refused('`foreign-origin`') },
  },
];
