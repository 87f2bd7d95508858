/** Requests and responses of the HTTP path as plain values. */
import type { BlockSink } from '../block-sink';
import type { IdempotencyStore } from './idempotency';
import { problem } from './problem';
import type { Problem } from './problem';

export type IngestRequest = {
  rigId: string;
  /** Names in lower case, as Node gives them; `content-type` among them. */
  headers: Record<string, string | string[] | undefined>;
  /** `?codes=1`: a CSV body holds ADC codes. */
  codes: boolean;
  body: Uint8Array;
};

/** Samples of one channel; `seq` is the last of the request. */
export type IngestAccepted = { stream: string; seq: number; accepted: number; duplicates: number };

export type IngestResponse = {
  status: number;
  headers: Record<string, string>;
  body: IngestAccepted | Problem;
};

export type HttpIngestParts = {
  sink: BlockSink;
  idempotency: IdempotencyStore;
  /** Unix time, ms. */
  nowMs: () => number;
  /** A stream name never used before. */
  newStreamName: () => string;
  /** Resolves when other work of the process has had its turn. */
  pause: () => Promise<void>;
  /** Bodies being worked on, of one rig and of all; a single body is always let in where its rig has none. */
  maxRigBytes?: number;
  maxBytes?: number;
};

export function headerOf(request: IngestRequest, name: string): string | undefined {
  const value = request.headers[name];
  return Array.isArray(value) ? value[0] : value;
}

export function acceptance(body: IngestAccepted): IngestResponse {
  return { status: 202, headers: { 'content-type': 'application/json' }, body };
}

export function refusal(body: Problem, headers: Record<string, string> = {}): IngestResponse {
  return { status: body.status, headers: { 'content-type': 'application/problem+json', ...headers }, body };
}

export function spoolUnavailable(detail: string): IngestResponse {
  return refusal(problem('spool-unavailable', 503, detail), { 'retry-after': '1' });
}
