import type { TurnmarkDb } from '../schema';
import type { CaptureTable } from '../schema/capture';
import { instant } from './common';
import { fullTextQuery } from './full-text';
import { before, rowsWanted, toPage } from './page';
import type { Page, PageQuery } from './page';
import type { RigRecord } from './rigs';
import type { SettingsRecord } from './settings';
import type { FindingCode } from '@/signal/model';
import { sql } from 'kysely';
import type { Selectable, SqlBool } from 'kysely';

export type CaptureFinding = { code: FindingCode; severity: 'note' | 'warn' | 'fault'; count: number };

export type CaptureRecord = {
  id: string;
  rigId: string;
  title: string;
  tags: string[];
  note: string;
  stream: string;
  startedAt: string;
  /** Lost samples included. */
  durationS: number;
  lengthSamples: number;
  rateHz: number;
  createdAt: string;
  createdBy: string;
  /** null once the person is gone. */
  createdById: string | null;
  settings: SettingsRecord;
  rig: RigRecord;
  channels: string[];
  findings: CaptureFinding[];
};

export type CaptureFilter = { rigId?: string; tag?: string; finding?: FindingCode; q?: string };

export async function getCapture(db: TurnmarkDb, id: string): Promise<CaptureRecord | null> {
  const row = await db
    .selectFrom('capture')
    .selectAll()
    .where('id', '=', id)
    .where('kept', '=', 1)
    .executeTakeFirst();
  if (row === undefined) return null;
  return (await withParts(db, [row]))[0] ?? null;
}

/** Newest first. A `q` without a letter or digit finds nothing; a blank one is none. */
export async function listCaptures(
  db: TurnmarkDb,
  query: PageQuery & CaptureFilter,
): Promise<Page<CaptureRecord>> {
  let rows = db.selectFrom('capture').selectAll().where('kept', '=', 1);
  if (query.rigId !== undefined) rows = rows.where('rig_id', '=', query.rigId);
  if (query.tag !== undefined) {
    const { tag } = query;
    rows = rows.where('row', 'in', (eb) =>
      eb.selectFrom('capture_tag').select('capture_row').where('tag', '=', tag),
    );
  }
  if (query.finding !== undefined) {
    const { finding } = query;
    rows = rows.where('row', 'in', (eb) =>
      eb.selectFrom('capture_finding').select('capture_row').where('code', '=', finding),
    );
  }
  if (query.q !== undefined && query.q.trim() !== '') {
    const match = fullTextQuery(query.q);
    if (match === null) return { items: [], nextCursor: null };
    rows = rows.where(
      sql<SqlBool>`row IN (SELECT rowid FROM capture_text WHERE capture_text MATCH ${match})`,
    );
  }
  if (query.cursor !== null) rows = rows.where(before('created_at_ms', 'id', query.cursor));
  const found = await rows
    .orderBy('created_at_ms', 'desc')
    .orderBy('id', 'desc')
    .limit(rowsWanted(query))
    .execute();
  const page = toPage(
    found,
    query,
    (row) => row,
    (row) => ({ key: row.created_at_ms, id: row.id }),
  );
  return { items: await withParts(db, page.items), nextCursor: page.nextCursor };
}

/** Changes what is given. null: no such capture. */
export async function updateCapture(
  db: TurnmarkDb,
  id: string,
  patch: { title?: string; tags?: readonly string[]; note?: string },
): Promise<CaptureRecord | null> {
  return await db.transaction().execute(async (trx) => {
    const row = await keptRow(trx, id);
    if (row === null) return null;
    const words = {
      ...(patch.title !== undefined && { title: patch.title }),
      ...(patch.note !== undefined && { note: patch.note }),
    };
    if (Object.keys(words).length > 0) {
      await trx.updateTable('capture').set(words).where('row', '=', row).execute();
    }
    if (patch.tags !== undefined) {
      await trx.deleteFrom('capture_tag').where('capture_row', '=', row).execute();
      await insertTags(trx, row, patch.tags);
    }
    await indexText(trx, row);
    return await getCapture(trx, id);
  });
}

/** The summary of the newest analysis, the worst first. False: no such capture. */
export async function setCaptureFindings(
  db: TurnmarkDb,
  id: string,
  findings: readonly CaptureFinding[],
): Promise<boolean> {
  return await db.transaction().execute(async (trx) => {
    const row = await keptRow(trx, id);
    if (row === null) return false;
    await trx.deleteFrom('capture_finding').where('capture_row', '=', row).execute();
    await insertFindings(trx, row, findings);
    return true;
  });
}

/** False: no such capture. */
export async function deleteCapture(db: TurnmarkDb, id: string): Promise<boolean> {
  const { numDeletedRows } = await db
    .deleteFrom('capture')
    .where('id', '=', id)
    .where('kept', '=', 1)
    .executeTakeFirst();
  return numDeletedRows > 0n;
}

/** The key of a capture's parts; null: no such capture. */
export async function keptRow(db: TurnmarkDb, id: string): Promise<number | null> {
  const found = await db
    .selectFrom('capture')
    .select('row')
    .where('id', '=', id)
    .where('kept', '=', 1)
    .executeTakeFirst();
  return found?.row ?? null;
}

/** A tag given twice is kept once. */
export async function insertTags(db: TurnmarkDb, row: number, tags: readonly string[]): Promise<void> {
  const values = [...new Set(tags)].map((tag, place) => ({ capture_row: row, place, tag }));
  if (values.length > 0) await db.insertInto('capture_tag').values(values).execute();
}

export async function insertFindings(
  db: TurnmarkDb,
  row: number,
  findings: readonly CaptureFinding[],
): Promise<void> {
  const values = findings.map(({ code, severity, count }, place) => ({
    capture_row: row,
    place,
    code,
    severity,
    count,
  }));
  if (values.length > 0) await db.insertInto('capture_finding').values(values).execute();
}

/** Makes the full-text index say what the capture says now. */
export async function indexText(db: TurnmarkDb, row: number): Promise<void> {
  await db.deleteFrom('capture_text').where('rowid', '=', row).execute();
  await sql`
    INSERT INTO capture_text (rowid, title, note, tags, rig_name)
    SELECT row, title, note, coalesce((SELECT group_concat(tag, ' ') FROM capture_tag WHERE capture_row = row), ''),
           coalesce(rig ->> '$.name', '')
    FROM capture WHERE row = ${row}`.execute(db);
}

async function withParts(
  db: TurnmarkDb,
  rows: readonly Selectable<CaptureTable>[],
): Promise<CaptureRecord[]> {
  if (rows.length === 0) return [];
  const keys = rows.map((row) => row.row);
  const tags = await db
    .selectFrom('capture_tag')
    .selectAll()
    .where('capture_row', 'in', keys)
    .orderBy('place')
    .execute();
  const findings = await db
    .selectFrom('capture_finding')
    .selectAll()
    .where('capture_row', 'in', keys)
    .orderBy('place')
    .execute();
  return rows.map((row) => ({
    id: row.id,
    rigId: row.rig_id,
    title: row.title,
    tags: tags.filter((t) => t.capture_row === row.row).map((t) => t.tag),
    note: row.note,
    stream: row.stream,
    startedAt: instant(row.started_at_ms),
    durationS: row.length_samples / row.rate_hz,
    lengthSamples: row.length_samples,
    rateHz: row.rate_hz,
    createdAt: instant(row.created_at_ms),
    createdBy: row.created_by,
    createdById: row.created_by_id,
    settings: JSON.parse(row.settings) as SettingsRecord,
    rig: JSON.parse(row.rig) as RigRecord,
    channels: JSON.parse(row.channels) as string[],
    findings: findings
      .filter((f) => f.capture_row === row.row)
      .map(({ code, severity, count }) => ({ code, severity, count })),
  }));
}
