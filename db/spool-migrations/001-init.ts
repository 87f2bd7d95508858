import type { Migration } from '../migrate';

export const init: Migration = {
  number: 1,
  name: 'init',
  sql: `
-- rig_id is null once the rig was deleted: the samples then go with the next purges.
CREATE TABLE stream (
  id INTEGER PRIMARY KEY,
  rig_id TEXT,
  name TEXT NOT NULL,
  rate_hz REAL NOT NULL,
  channels TEXT NOT NULL,
  opened_at_ms INTEGER NOT NULL,
  next_seq INTEGER,
  next_index INTEGER NOT NULL DEFAULT 0,
  state TEXT NOT NULL DEFAULT '',
  last_block_at_ms INTEGER,
  UNIQUE (rig_id, name)
) STRICT;
-- the stream of a rig that had the newest block
CREATE INDEX stream_newest ON stream (rig_id, last_block_at_ms, id);

CREATE TABLE segment (
  id INTEGER PRIMARY KEY,
  stream_id INTEGER NOT NULL REFERENCES stream (id),
  start_index INTEGER NOT NULL,
  count INTEGER NOT NULL CHECK (count > 0),
  first_seq INTEGER NOT NULL,
  last_seq INTEGER NOT NULL,
  time_s REAL,
  received_at_ms INTEGER NOT NULL,
  layout TEXT NOT NULL,
  data BLOB NOT NULL,
  UNIQUE (stream_id, start_index)
) STRICT;
-- purge: the oldest first
CREATE INDEX segment_age ON segment (received_at_ms);

CREATE TABLE early (
  stream_id INTEGER NOT NULL REFERENCES stream (id),
  seq INTEGER NOT NULL,
  count INTEGER NOT NULL CHECK (count > 0),
  time_s REAL,
  received_at_ms INTEGER NOT NULL,
  layout TEXT NOT NULL,
  data BLOB NOT NULL,
  PRIMARY KEY (stream_id, seq)
) STRICT;

CREATE TABLE gap (
  stream_id INTEGER NOT NULL REFERENCES stream (id),
  from_index INTEGER NOT NULL,
  lost_samples INTEGER NOT NULL CHECK (lost_samples >= 0),
  estimated INTEGER NOT NULL CHECK (estimated IN (0, 1)),
  PRIMARY KEY (stream_id, from_index)
) STRICT, WITHOUT ROWID;
`,
};
