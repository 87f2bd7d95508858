/** An uploaded recording, whatever its format, as what a capture is made of. */
import type { CaptureGap, Piece } from '@/db';
import type { IngestIssue } from '@/ingest/block';

export type Upload = {
  rateHz: number;
  channels: string[];
  /** As the file says, else 'upload'. */
  stream: string;
  /** Unix time of the first sample, s; undefined where the file does not tell. */
  startedAtS: number | undefined;
  gaps: CaptureGap[];
  lengthSamples: number;
  /** In order; may be asked for once more. */
  pieces(): Iterable<Piece>;
};

export type UploadResult = { ok: true; upload: Upload } | { ok: false; issue: IngestIssue };

/** What a file has at most. */
export const maxUploadBytes = 256 * 1024 * 1024;

/** Earlier instants are clocks that count from a start, not the time of day: 2001-09-09. Later ones are no instants. */
const oldestUnixS = 1e9;
const latestUnixS = Date.UTC(9999, 0) / 1000;

export function unixTimeOf(timeS: number | undefined): number | undefined {
  return timeS !== undefined && timeS >= oldestUnixS && timeS < latestUnixS ? timeS : undefined;
}

export function unreadable(detail: string, at?: string): { ok: false; issue: IngestIssue } {
  return { ok: false, issue: { slug: 'unreadable', status: 400, detail, pointer: undefined, at } };
}

export function refused(detail: string, at?: string): { ok: false; issue: IngestIssue } {
  return { ok: false, issue: { slug: 'invalid', status: 422, detail, pointer: undefined, at } };
}
