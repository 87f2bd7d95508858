import type { Database as Sqlite } from 'better-sqlite3';
import type { Stretch } from './spool-types';

type Doomed = { id: number; stream_id: number; end_index: number };

/** The body of `Spool.purge`, to be run in a transaction. */
export function createPurge(sqlite: Sqlite) {
  // A scalar list as JSON, since the number of stretches varies: [[streamId, fromIndex, toIndex], ...].
  const notHeld = `NOT EXISTS (
    SELECT 1 FROM json_each(@held) AS h
    WHERE h.value ->> 0 = segment.stream_id AND h.value ->> 1 < segment.start_index + segment.count
      AND h.value ->> 2 > segment.start_index)`;
  const columns = 'segment.id, segment.stream_id, segment.start_index + segment.count AS end_index';
  const orphaned = sqlite.prepare<[{ held: string; limit: number }], Doomed>(
    `SELECT ${columns} FROM stream JOIN segment ON segment.stream_id = stream.id
     WHERE stream.rig_id IS NULL AND ${notHeld} LIMIT @limit`,
  );
  const aged = sqlite.prepare<[{ held: string; limit: number; olderThanMs: number }], Doomed>(
    `SELECT ${columns} FROM segment WHERE received_at_ms < @olderThanMs AND ${notHeld}
     ORDER BY received_at_ms LIMIT @limit`,
  );
  const deleteSegment = sqlite.prepare<[number]>('DELETE FROM segment WHERE id = ?');
  const oldest = sqlite.prepare<[number], { start_index: number }>(
    'SELECT start_index FROM segment WHERE stream_id = ? ORDER BY start_index LIMIT 1',
  );
  const deleteGaps = sqlite.prepare<[number, number]>(
    'DELETE FROM gap WHERE stream_id = ? AND from_index < ?',
  );
  const deleteEarly = sqlite.prepare<[number, number]>(
    `DELETE FROM early WHERE rowid IN (
       SELECT rowid FROM early
       WHERE received_at_ms < ? OR stream_id IN (SELECT id FROM stream WHERE rig_id IS NULL) LIMIT ?)`,
  );
  const deleteOrphanGaps = sqlite.prepare(
    `DELETE FROM gap WHERE stream_id IN (SELECT id FROM stream WHERE rig_id IS NULL)
       AND NOT EXISTS (SELECT 1 FROM segment WHERE stream_id = gap.stream_id)`,
  );
  const deleteOrphans = sqlite.prepare(
    `DELETE FROM stream WHERE rig_id IS NULL AND NOT EXISTS (SELECT 1 FROM segment WHERE stream_id = stream.id)
       AND NOT EXISTS (SELECT 1 FROM early WHERE stream_id = stream.id)`,
  );

  function drop(rows: readonly Doomed[]): void {
    const goneTo = new Map<number, number>();
    for (const row of rows) {
      deleteSegment.run(row.id);
      goneTo.set(row.stream_id, Math.max(goneTo.get(row.stream_id) ?? 0, row.end_index));
    }
    for (const [streamId, end] of goneTo) deleteGaps.run(streamId, oldest.get(streamId)?.start_index ?? end);
  }

  return (olderThanMs: number, maxRows: number, heldStretches: readonly Stretch[]): number => {
    const held = JSON.stringify(heldStretches.map((h) => [h.streamId, h.fromIndex, h.toIndex]));
    const orphans = orphaned.all({ held, limit: maxRows });
    drop(orphans);
    let left = maxRows - orphans.length;
    const old = left > 0 ? aged.all({ held, limit: left, olderThanMs }) : [];
    drop(old);
    left -= old.length;
    const early = left > 0 ? deleteEarly.run(olderThanMs, left).changes : 0;
    if (left - early > 0) {
      deleteOrphanGaps.run();
      deleteOrphans.run();
    }
    return orphans.length + old.length + early;
  };
}
