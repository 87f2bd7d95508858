import type { Database as Sqlite } from 'better-sqlite3';

export type StreamRow = {
  id: number;
  rig_id: string;
  name: string;
  rate_hz: number;
  channels: string;
  opened_at_ms: number;
  next_seq: number | null;
  next_index: number;
  state: string;
  last_block_at_ms: number | null;
};
export type PlaceRow = { start_index: number; count: number; received_at_ms: number; time_s: number | null };
export type SegmentRow = PlaceRow & { layout: string; data: Uint8Array };
export type EarlyRow = {
  seq: number;
  count: number;
  time_s: number | null;
  received_at_ms: number;
  layout: string;
  data: Uint8Array;
};
type GapRow = { from_index: number; lost_samples: number; estimated: number };

const place = 'start_index, count, received_at_ms, time_s';

/** Every statement of the spool, prepared once. */
export function prepareSpool(sqlite: Sqlite) {
  const one = <P extends unknown[], R>(sql: string) => sqlite.prepare<P, R>(sql);
  return {
    // One of which nothing was ever committed begins anew; any other of that name is a mistake of the caller's.
    insertStream: one<[string, string, number, string, number], { id: number }>(
      `INSERT INTO stream (rig_id, name, rate_hz, channels, opened_at_ms) VALUES (?, ?, ?, ?, ?)
       ON CONFLICT DO UPDATE SET rate_hz = excluded.rate_hz, channels = excluded.channels,
                                 opened_at_ms = excluded.opened_at_ms
       WHERE state = ''
       RETURNING id`,
    ),
    updateStream: one<[number, number, string, number, number], never>(
      'UPDATE stream SET next_seq = ?, next_index = ?, state = ?, last_block_at_ms = ? WHERE id = ?',
    ),
    orphanStreams: one<[string], never>('UPDATE stream SET rig_id = NULL WHERE rig_id = ?'),
    streamByName: one<[string, string], StreamRow>('SELECT * FROM stream WHERE rig_id = ? AND name = ?'),
    streamById: one<[number], StreamRow>('SELECT * FROM stream WHERE id = ? AND rig_id IS NOT NULL'),
    newestStream: one<[string], StreamRow>(
      `SELECT * FROM stream WHERE rig_id = ? AND last_block_at_ms IS NOT NULL
       ORDER BY last_block_at_ms DESC, id DESC LIMIT 1`,
    ),
    streamsOfRig: one<[string, number], StreamRow>(
      'SELECT * FROM stream WHERE rig_id = ? ORDER BY last_block_at_ms DESC, id DESC LIMIT ?',
    ),
    recentStreams: one<[number], StreamRow>(
      'SELECT * FROM stream WHERE rig_id IS NOT NULL AND last_block_at_ms >= ? ORDER BY id',
    ),
    insertSegment: one<
      [number, number, number, number, number, number | null, number, string, Uint8Array],
      never
    >(
      `INSERT INTO segment (stream_id, start_index, count, first_seq, last_seq, time_s, received_at_ms, layout, data)
       VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?)`,
    ),
    segmentHolding: one<[number, number], SegmentRow>(
      `SELECT ${place}, layout, data FROM segment WHERE stream_id = ? AND start_index <= ?
       ORDER BY start_index DESC LIMIT 1`,
    ),
    segmentAfter: one<[number, number, number], SegmentRow>(
      `SELECT ${place}, layout, data FROM segment WHERE stream_id = ? AND start_index > ? AND start_index < ?
       ORDER BY start_index LIMIT 1`,
    ),
    placeHolding: one<[number, number], PlaceRow>(
      `SELECT ${place} FROM segment WHERE stream_id = ? AND start_index <= ? ORDER BY start_index DESC LIMIT 1`,
    ),
    oldest: one<[number], { start_index: number }>(
      'SELECT start_index FROM segment WHERE stream_id = ? ORDER BY start_index LIMIT 1',
    ),
    insertEarly: one<[number, number, number, number | null, number, string, Uint8Array], never>(
      `INSERT INTO early (stream_id, seq, count, time_s, received_at_ms, layout, data)
       VALUES (?, ?, ?, ?, ?, ?, ?)`,
    ),
    deleteEarly: one<[number, number], never>('DELETE FROM early WHERE stream_id = ? AND seq = ?'),
    early: one<[number], EarlyRow>('SELECT * FROM early WHERE stream_id = ? ORDER BY seq'),
    // Two losses with no sample between them are one gap.
    insertGap: one<[number, number, number, number], never>(
      `INSERT INTO gap (stream_id, from_index, lost_samples, estimated) VALUES (?, ?, ?, ?)
       ON CONFLICT DO UPDATE SET lost_samples = lost_samples + excluded.lost_samples,
                                 estimated = max(estimated, excluded.estimated)`,
    ),
    gaps: one<[number, number, number, number], GapRow>(
      `SELECT from_index, lost_samples, estimated FROM gap
       WHERE stream_id = ? AND from_index < ? AND (from_index + lost_samples > ? OR from_index >= ?)
       ORDER BY from_index`,
    ),
  };
}
