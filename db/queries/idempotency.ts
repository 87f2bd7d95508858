import type { TurnmarkDb } from '../schema';

/** The response that a key was answered with, or null where it is new or forgotten. */
export async function recallResponse(
  db: TurnmarkDb,
  { rigId, key, nowMs }: { rigId: string; key: string; nowMs: number },
): Promise<unknown> {
  const row = await db
    .selectFrom('idempotency')
    .select('response')
    .where('rig_id', '=', rigId)
    .where('key', '=', key)
    .where('expires_at_ms', '>', nowMs)
    .executeTakeFirst();
  return row === undefined ? null : (JSON.parse(row.response) as unknown);
}

/** Remembers a response, in place of one that the key had before. */
export async function replaceResponse(
  db: TurnmarkDb,
  entry: { rigId: string; key: string; response: unknown; expiresAtMs: number },
): Promise<void> {
  const values = { response: JSON.stringify(entry.response), expires_at_ms: entry.expiresAtMs };
  await db
    .insertInto('idempotency')
    .values({ rig_id: entry.rigId, key: entry.key, ...values })
    .onConflict((oc) => oc.columns(['rig_id', 'key']).doUpdateSet(values))
    .execute();
}

/** The key is new again. */
export async function forgetResponse(db: TurnmarkDb, rigId: string, key: string): Promise<void> {
  await db.deleteFrom('idempotency').where('rig_id', '=', rigId).where('key', '=', key).execute();
}

/** How many were forgotten. */
export async function pruneResponses(db: TurnmarkDb, nowMs: number): Promise<number> {
  const { numDeletedRows } = await db
    .deleteFrom('idempotency')
    .where('expires_at_ms', '<=', nowMs)
    .executeTakeFirst();
  return Number(numDeletedRows);
}
