import { blockLimits } from '../block';
import type { Block, IngestIssue } from '../block';

/** One block of a message, or why it cannot be taken; `stream` and `seq` where they could be read. */
export type BlockResult =
  | { ok: true; block: Block }
  | { ok: false; issue: IngestIssue; stream: string | undefined; seq: number | undefined };

/**
 * What a message holds. `ok: false` is a message of which nothing can be used; a bad block beside good ones is an entry
 * of `blocks`, which keeps the message's order.
 */
export type MessageResult =
  { ok: true; batch: boolean; blocks: BlockResult[] } | { ok: false; issue: IngestIssue };

/** A bad block of which not even stream or number could be read. */
export function isNameless(result: BlockResult): boolean {
  return !result.ok && (result.stream === undefined || result.seq === undefined);
}

/** Of a batch that is mostly something else: each item would be answered with far more than it took to send. */
export function noBatch(pointer: string): IngestIssue {
  const detail = `More than ${blockLimits.maxNameless} items of the batch do not name a block; none of it was taken.`;
  return invalid(detail, pointer);
}

/** Not text or bytes of the format at all. `at` says where: byte, line or row. */
export function unreadable(detail: string, at?: string): IngestIssue {
  return { slug: 'unreadable', status: 400, detail, pointer: undefined, at };
}

/** Readable, but not a valid block. `pointer` is the JSON pointer of the field at fault. */
export function invalid(detail: string, pointer?: string, at?: string): IngestIssue {
  return { slug: 'invalid', status: 422, detail, pointer, at };
}

export function tooLarge(detail: string, pointer?: string): IngestIssue {
  return { slug: 'too-large', status: 413, detail, pointer, at: undefined };
}

/** One member of a JSON pointer (RFC 6901). */
export function pointerPart(name: string): string {
  if (!name.includes('~') && !name.includes('/')) return '/' + name;
  return '/' + name.replaceAll('~', '~0').replaceAll('/', '~1');
}

/** A name from outside, short enough for a message. */
export function quoted(name: string): string {
  return JSON.stringify(name.length > 40 ? name.slice(0, 40) + '…' : name);
}
