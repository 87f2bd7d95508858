import { sql } from 'kysely';
import type { Result } from '@/signal/model';
import type { SqlBool } from 'kysely';

/** Where the next page begins: after the row with this key and id. */
export type Cursor = { key: number; id: string };
export type PageQuery = { cursor: Cursor | null; limit: number };
export type Page<T> = { items: T[]; nextCursor: string | null };
export type BadCursor = { code: 'bad-cursor' };

/** Lists are cut to so many items, whatever is asked. */
const maxPageItems = 100;

/** The first page of the longest kind, for callers that want it plain. */
export const firstPage: PageQuery = { cursor: null, limit: maxPageItems };

function encodeCursor(cursor: Cursor): string {
  return Buffer.from(JSON.stringify([cursor.key, cursor.id])).toString('base64url');
}

/** null: from the start. */
export function decodeCursor(text: string | null | undefined): Result<Cursor | null, BadCursor> {
  if (text === null || text === undefined) return { ok: true, value: null };
  try {
    const [key, id, ...rest] = JSON.parse(Buffer.from(text, 'base64url').toString()) as unknown[];
    if (typeof key === 'number' && Number.isFinite(key) && typeof id === 'string' && rest.length === 0) {
      return { ok: true, value: { key, id } };
    }
  } catch {
    // Not ours: the same answer as for any other bad cursor.
  }
  return { ok: false, issue: { code: 'bad-cursor' } };
}

/** How many rows to ask for: one more than the page, which tells whether another follows. */
export function rowsWanted({ limit }: PageQuery): number {
  return pageItems(limit) + 1;
}

/** Rows older than the cursor, by a numeric column and then the id; newest first goes with it. */
export function before(keyColumn: string, idColumn: string, cursor: Cursor) {
  return sql<SqlBool>`(${sql.ref(keyColumn)}, ${sql.ref(idColumn)}) < (${cursor.key}, ${cursor.id})`;
}

/** Cuts rows asked for with `rowsWanted` to the page. */
export function toPage<R, T>(
  rows: readonly R[],
  query: PageQuery,
  item: (row: R) => T,
  cursorOf: (row: R) => Cursor,
): Page<T> {
  const shown = rows.slice(0, pageItems(query.limit));
  const last = shown.at(-1);
  const more = rows.length > shown.length && last !== undefined;
  return { items: shown.map(item), nextCursor: more ? encodeCursor(cursorOf(last)) : null };
}

function pageItems(limit: number): number {
  return Math.min(maxPageItems, Math.max(1, Math.floor(limit)));
}
