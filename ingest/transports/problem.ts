/** Problem details (RFC 9457) for what the ingest paths refuse. */
import type { IngestIssue } from '../block';

export type ProblemSlug = IngestIssue['slug'] | 'no-key' | 'key-revoked' | 'too-fast' | 'spool-unavailable';

export type Problem = {
  type: `urn:turnmark:problem:${ProblemSlug}`;
  title: string;
  status: number;
  detail: string;
  /** JSON pointer to the field at fault. */
  pointer?: string;
  /** Byte, line or row. */
  at?: string;
  stream?: string;
  seq?: number;
  blocks?: BlockReport[];
};

/** One block of a batch, as the extension member `blocks` lists it. */
export type BlockReport = {
  stream?: string;
  seq?: number;
  result: 'accepted' | 'duplicate' | 'refused';
  problem?: Problem;
};

const titles: Record<ProblemSlug, string> = {
  unreadable: 'The message cannot be read',
  invalid: 'The message is not valid',
  'stream-changed': 'The stream changed its rate or channels',
  'too-late': 'The block came too late',
  'too-large': 'The message is too large',
  'content-type': 'The content type is not one that is taken',
  'no-key': 'A rig key is needed',
  'key-revoked': 'The rig key was revoked',
  'too-fast': 'The rig sends faster than the hub can take',
  'spool-unavailable': 'The hub cannot store samples now',
};

export function problem(slug: ProblemSlug, status: number, detail: string): Problem {
  return { type: `urn:turnmark:problem:${slug}`, title: titles[slug], status, detail };
}

/** The problem of an issue; `stream` and `seq` name the block where they are known. */
export function problemOf(issue: IngestIssue, stream?: string, seq?: number): Problem {
  const result = problem(issue.slug, issue.status, issue.detail);
  if (issue.pointer !== undefined) result.pointer = issue.pointer;
  if (issue.at !== undefined) result.at = issue.at;
  if (stream !== undefined) result.stream = stream;
  if (seq !== undefined) result.seq = seq;
  return result;
}
