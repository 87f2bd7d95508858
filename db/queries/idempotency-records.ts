import type { TurnmarkDb } from '../schema';

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
