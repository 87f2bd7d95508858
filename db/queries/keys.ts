import { newId } from '../ids';
import type { TurnmarkDb } from '../schema';
import type { RigKeyTable } from '../schema/rig-key';
import { instant, instantOrNull } from './common';
import type { Actor } from './common';
import { before, rowsWanted, toPage } from './page';
import type { Page, PageQuery } from './page';

export type RigKeyRecord = {
  /** Also the `kid` of the key. */
  id: string;
  rigId: string;
  name: string;
  createdAt: string;
  createdBy: string;
  lastUsedAt: string | null;
  revokedAt: string | null;
};

/** The state of a new key; the key itself is made by the caller from `id` and never comes here. */
export async function createKey(
  db: TurnmarkDb,
  key: { rigId: string; name: string; by: Actor; nowMs: number },
): Promise<RigKeyRecord> {
  const row: RigKeyTable = {
    id: newId(),
    rig_id: key.rigId,
    name: key.name,
    created_at_ms: key.nowMs,
    created_by: key.by.name,
    created_by_id: key.by.id,
    revoked_at_ms: null,
    last_used_at_ms: null,
  };
  await db.insertInto('rig_key').values(row).execute();
  return toKey(row);
}

/** Revoked ones too. null: no such key (or its rig is gone). */
export async function findKey(db: TurnmarkDb, id: string): Promise<RigKeyRecord | null> {
  const row = await db.selectFrom('rig_key').selectAll().where('id', '=', id).executeTakeFirst();
  return row === undefined ? null : toKey(row);
}

/** The keys of a rig that are good. */
export async function listKeys(db: TurnmarkDb, rigId: string, query: PageQuery): Promise<Page<RigKeyRecord>> {
  let rows = db
    .selectFrom('rig_key')
    .selectAll()
    .where('rig_id', '=', rigId)
    .where('revoked_at_ms', 'is', null);
  if (query.cursor !== null) rows = rows.where(before('created_at_ms', 'id', query.cursor));
  const found = await rows
    .orderBy('created_at_ms', 'desc')
    .orderBy('id', 'desc')
    .limit(rowsWanted(query))
    .execute();
  return toPage(found, query, toKey, (row) => ({ key: row.created_at_ms, id: row.id }));
}

/** False: the rig has no such key that is still good. */
export async function revokeKey(
  db: TurnmarkDb,
  key: { rigId: string; keyId: string; nowMs: number },
): Promise<boolean> {
  const { numUpdatedRows } = await db
    .updateTable('rig_key')
    .set({ revoked_at_ms: key.nowMs })
    .where('id', '=', key.keyId)
    .where('rig_id', '=', key.rigId)
    .where('revoked_at_ms', 'is', null)
    .executeTakeFirst();
  return numUpdatedRows > 0n;
}

/** Remembers that a key was used. A write with a sync: call it now and then, not for each block. */
export async function touchKey(db: TurnmarkDb, keyId: string, nowMs: number): Promise<void> {
  await db.updateTable('rig_key').set({ last_used_at_ms: nowMs }).where('id', '=', keyId).execute();
}

function toKey(row: RigKeyTable): RigKeyRecord {
  return {
    id: row.id,
    rigId: row.rig_id,
    name: row.name,
    createdAt: instant(row.created_at_ms),
    createdBy: row.created_by,
    lastUsedAt: instantOrNull(row.last_used_at_ms),
    revokedAt: instantOrNull(row.revoked_at_ms),
  };
}
