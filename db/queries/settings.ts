import type { TurnmarkDb } from '../schema';
import type { SettingsVersionTable } from '../schema/settings-version';
import { instant } from './common';
import type { Actor } from './common';
import { rowsWanted, toPage } from './page';
import type { Page, PageQuery } from './page';
import type { Settings } from '@/signal/model';

export type SettingsRecord = Settings & {
  version: number;
  createdAt: string;
  createdBy: string;
  reason: string;
};

/** Numbers follow one another from 1 within a rig. */
export async function addSettings(
  db: TurnmarkDb,
  entry: { rigId: string; settings: Settings; reason: string; by: Actor; nowMs: number },
): Promise<SettingsRecord> {
  const { filter, band, holdoffS, speed } = entry.settings;
  const row = await db
    .insertInto('settings_version')
    .values((eb) => ({
      rig_id: entry.rigId,
      version: eb
        .selectFrom('settings_version')
        .where('rig_id', '=', entry.rigId)
        .select((e) => e(e.fn.coalesce(e.fn.max('version'), e.val(0)), '+', e.val(1)).as('next'))
        .$asScalar(),
      settings: JSON.stringify({ filter, band, holdoffS, speed } satisfies Settings),
      reason: entry.reason,
      created_at_ms: entry.nowMs,
      created_by: entry.by.name,
      created_by_id: entry.by.id,
    }))
    .returningAll()
    .executeTakeFirstOrThrow();
  return toSettings(row);
}

/** The version in force. null: the rig has none yet (the defaults of the signal path hold). */
export async function newestSettings(db: TurnmarkDb, rigId: string): Promise<SettingsRecord | null> {
  const row = await db
    .selectFrom('settings_version')
    .selectAll()
    .where('rig_id', '=', rigId)
    .orderBy('version', 'desc')
    .limit(1)
    .executeTakeFirst();
  return row === undefined ? null : toSettings(row);
}

export async function listSettings(
  db: TurnmarkDb,
  rigId: string,
  query: PageQuery,
): Promise<Page<SettingsRecord>> {
  let rows = db.selectFrom('settings_version').selectAll().where('rig_id', '=', rigId);
  if (query.cursor !== null) rows = rows.where('version', '<', query.cursor.key);
  const found = await rows.orderBy('version', 'desc').limit(rowsWanted(query)).execute();
  return toPage(found, query, toSettings, (row) => ({ key: row.version, id: row.rig_id }));
}

function toSettings(row: SettingsVersionTable): SettingsRecord {
  return {
    version: row.version,
    createdAt: instant(row.created_at_ms),
    createdBy: row.created_by,
    reason: row.reason,
    ...(JSON.parse(row.settings) as Settings),
  };
}
