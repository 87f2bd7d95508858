import { newId } from '../ids';
import type { TurnmarkDb } from '../schema';
import type { RigTable } from '../schema/rig';
import { instant } from './common';
import { before, rowsWanted, toPage } from './page';
import type { Page, PageQuery } from './page';
import type { RigSetup } from '@/signal/model';

export type RigRecord = { id: string; name: string; createdAt: string } & RigSetup;

export async function createRig(
  db: TurnmarkDb,
  rig: { name: string; setup: RigSetup; nowMs: number },
): Promise<RigRecord> {
  const row: RigTable = {
    id: newId(),
    name: rig.name,
    setup: setupJson(rig.setup),
    created_at_ms: rig.nowMs,
  };
  await db.insertInto('rig').values(row).execute();
  return toRig(row);
}

export async function getRig(db: TurnmarkDb, id: string): Promise<RigRecord | null> {
  const row = await db.selectFrom('rig').selectAll().where('id', '=', id).executeTakeFirst();
  return row === undefined ? null : toRig(row);
}

export async function listRigs(db: TurnmarkDb, query: PageQuery): Promise<Page<RigRecord>> {
  let rows = db.selectFrom('rig').selectAll();
  if (query.cursor !== null) rows = rows.where(before('created_at_ms', 'id', query.cursor));
  const found = await rows
    .orderBy('created_at_ms', 'desc')
    .orderBy('id', 'desc')
    .limit(rowsWanted(query))
    .execute();
  return toPage(found, query, toRig, (row) => ({ key: row.created_at_ms, id: row.id }));
}

/** Every rig, oldest first: what a starting hub loads. */
export async function allRigs(db: TurnmarkDb): Promise<RigRecord[]> {
  const rows = await db.selectFrom('rig').selectAll().orderBy('created_at_ms').orderBy('id').execute();
  return rows.map(toRig);
}

/** Replaces name and setup. null: no such rig. */
export async function updateRig(
  db: TurnmarkDb,
  id: string,
  rig: { name: string; setup: RigSetup },
): Promise<RigRecord | null> {
  const row = await db
    .updateTable('rig')
    .set({ name: rig.name, setup: setupJson(rig.setup) })
    .where('id', '=', id)
    .returningAll()
    .executeTakeFirst();
  return row === undefined ? null : toRig(row);
}

/** Its keys and settings go too; its captures stay. False: no such rig. */
export async function deleteRig(db: TurnmarkDb, id: string): Promise<boolean> {
  const { numDeletedRows } = await db.deleteFrom('rig').where('id', '=', id).executeTakeFirst();
  return numDeletedRows > 0n;
}

function setupJson(setup: RigSetup): string {
  const { sensing, wheel, channels, expectedDirection, ratedRpm } = setup;
  return JSON.stringify({ sensing, wheel, channels, expectedDirection, ratedRpm } satisfies RigSetup);
}

function toRig(row: RigTable): RigRecord {
  return {
    id: row.id,
    name: row.name,
    ...(JSON.parse(row.setup) as RigSetup),
    createdAt: instant(row.created_at_ms),
  };
}
