import { z } from 'zod';

/** RFC 3339, UTC. */
export const instant = z.iso.datetime({ offset: false }).meta({ description: 'RFC 3339 instant in UTC' });
export const id = z.string().min(1).max(64);
export const finite = z.number().refine(Number.isFinite, 'must be a finite number');
export const positive = finite.refine((n) => n > 0, 'must be greater than 0');

export function listOf<T extends z.ZodType>(item: T) {
  return z.object({ items: z.array(item), nextCursor: z.string().nullable() });
}

/** RFC 9457 problem; `type` is `urn:turnmark:problem:<slug>`. */
export const problem = z
  .looseObject({
    type: z.string(),
    title: z.string(),
    status: z.number().int(),
    detail: z.string().optional(),
    errors: z.array(z.object({ pointer: z.string(), detail: z.string() })).optional(),
  })
  .meta({ id: 'Problem' });
export type Problem = z.infer<typeof problem>;

export const problemPrefix = 'urn:turnmark:problem:';

export const roles = ['reviewer', 'engineer', 'admin'] as const;
export const role = z.enum(roles);
export type Role = z.infer<typeof role>;

/** Roles are cumulative: reviewer < engineer < admin. */
export function roleAtLeast(held: Role, wanted: Role): boolean {
  return roles.indexOf(held) >= roles.indexOf(wanted);
}
