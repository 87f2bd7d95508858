import type { TurnmarkDb } from '../schema';
import { instant } from './common';
import type { Actor } from './common';
import { rowsWanted, toPage } from './page';
import type { Page, PageQuery } from './page';

export type AuditEntry = {
  id: number;
  at: string;
  actor: string;
  actorId: string | null;
  /** Thing and verb, such as `rig-key.revoked`. */
  action: string;
  /** Id of what it was done to. */
  subject: string;
  detail: Record<string, unknown>;
};

/** Never put a secret into `detail`. */
export async function writeAudit(
  db: TurnmarkDb,
  entry: { by: Actor; action: string; subject: string; detail?: Record<string, unknown>; nowMs: number },
): Promise<void> {
  await db
    .insertInto('audit')
    .values({
      at_ms: entry.nowMs,
      actor_id: entry.by.id,
      actor: entry.by.name,
      action: entry.action,
      subject: entry.subject,
      detail: JSON.stringify(entry.detail ?? {}),
    })
    .execute();
}

export async function listAudit(
  db: TurnmarkDb,
  query: PageQuery & { subject?: string },
): Promise<Page<AuditEntry>> {
  let rows = db.selectFrom('audit').selectAll();
  if (query.subject !== undefined) rows = rows.where('subject', '=', query.subject);
  if (query.cursor !== null) rows = rows.where('id', '<', query.cursor.key);
  const found = await rows.orderBy('id', 'desc').limit(rowsWanted(query)).execute();
  return toPage(
    found,
    query,
    (row) => ({
      id: row.id,
      at: instant(row.at_ms),
      actor: row.actor,
      actorId: row.actor_id,
      action: row.action,
      subject: row.subject,
      detail: JSON.parse(row.detail) as Record<string, unknown>,
    }),
    (row) => ({ key: row.id, id: '' }),
  );
}
