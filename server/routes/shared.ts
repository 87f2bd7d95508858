/** Parts that several routes ask for. */
import { z } from 'zod';
import { decodeCursor } from '@/db';
import type { PageQuery } from '@/db';
import { id } from '@/server/contract';
import { ApiProblem, invalidField } from '@/server/http/problems';

export const rigParams = z.object({ rigId: id });
export const keyParams = z.object({ rigId: id, keyId: id });
export const captureParams = z.object({ captureId: id });

export const pageQuery = z.object({
  cursor: z.string().max(200).optional().meta({ description: '`nextCursor` of the page before' }),
  limit: z.coerce.number().int().min(1).max(100).default(50),
});

export function pageOf({ cursor, limit }: { cursor?: string; limit: number }): PageQuery {
  const decoded = decodeCursor(cursor);
  if (!decoded.ok) throw invalidField('/cursor', 'is not a cursor of this list');
  return { cursor: decoded.value, limit };
}

export function found<T>(value: T | undefined | null, what: string): T {
  if (value === undefined || value === null)
    throw new ApiProblem('not-found', { detail: `There is no such ${what}.` });
  return value;
}
