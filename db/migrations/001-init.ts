import type { Migration } from '../migrate';

export const init: Migration = {
  number: 1,
  name: 'init',
  sql: `
CREATE TABLE person (
  id TEXT PRIMARY KEY,
  email TEXT NOT NULL,
  -- the address folded to one case, so that nobody is there twice
  email_key TEXT NOT NULL UNIQUE,
  name TEXT NOT NULL,
  role TEXT NOT NULL CHECK (role IN ('reviewer', 'engineer', 'admin')),
  password_hash TEXT,
  disabled INTEGER NOT NULL DEFAULT 0 CHECK (disabled IN (0, 1)),
  created_at_ms INTEGER NOT NULL
) STRICT;
-- people, newest first
CREATE INDEX person_newest ON person (created_at_ms, id);

CREATE TABLE session_family (
  id TEXT PRIMARY KEY,
  person_id TEXT NOT NULL REFERENCES person (id) ON DELETE CASCADE,
  created_at_ms INTEGER NOT NULL,
  expires_at_ms INTEGER NOT NULL,
  ended_at_ms INTEGER,
  newest_counter INTEGER NOT NULL
) STRICT;
-- sign-out everywhere; deleting a person
CREATE INDEX session_family_person ON session_family (person_id);
-- pruning
CREATE INDEX session_family_expiry ON session_family (expires_at_ms);

CREATE TABLE refresh_token (
  token_hash TEXT PRIMARY KEY,
  family_id TEXT NOT NULL REFERENCES session_family (id) ON DELETE CASCADE,
  counter INTEGER NOT NULL,
  issued_at_ms INTEGER NOT NULL,
  replaced_at_ms INTEGER,
  UNIQUE (family_id, counter)
) STRICT;

CREATE TABLE rig (
  id TEXT PRIMARY KEY,
  name TEXT NOT NULL,
  setup TEXT NOT NULL CHECK (json_valid(setup)),
  created_at_ms INTEGER NOT NULL
) STRICT;
-- rigs, newest first
CREATE INDEX rig_newest ON rig (created_at_ms, id);

CREATE TABLE rig_key (
  id TEXT PRIMARY KEY,
  rig_id TEXT NOT NULL REFERENCES rig (id) ON DELETE CASCADE,
  name TEXT NOT NULL,
  created_at_ms INTEGER NOT NULL,
  created_by TEXT NOT NULL,
  created_by_id TEXT REFERENCES person (id) ON DELETE SET NULL,
  revoked_at_ms INTEGER,
  last_used_at_ms INTEGER
) STRICT;
-- keys of a rig, newest first
CREATE INDEX rig_key_newest ON rig_key (rig_id, created_at_ms, id);
-- deleting a person
CREATE INDEX rig_key_creator ON rig_key (created_by_id);

CREATE TABLE settings_version (
  rig_id TEXT NOT NULL REFERENCES rig (id) ON DELETE CASCADE,
  version INTEGER NOT NULL CHECK (version > 0),
  settings TEXT NOT NULL CHECK (json_valid(settings)),
  reason TEXT NOT NULL,
  created_at_ms INTEGER NOT NULL,
  created_by TEXT NOT NULL,
  created_by_id TEXT REFERENCES person (id) ON DELETE SET NULL,
  PRIMARY KEY (rig_id, version)
) STRICT;
-- deleting a person
CREATE INDEX settings_version_creator ON settings_version (created_by_id);

-- A capture outlives its rig: it carries the rig as it was. kept is 0 while its chunks are being written.
CREATE TABLE capture (
  row INTEGER PRIMARY KEY,
  id TEXT NOT NULL UNIQUE,
  rig_id TEXT NOT NULL,
  kept INTEGER NOT NULL CHECK (kept IN (0, 1)),
  title TEXT NOT NULL,
  note TEXT NOT NULL,
  stream TEXT NOT NULL,
  started_at_ms INTEGER NOT NULL,
  rate_hz REAL NOT NULL CHECK (rate_hz > 0),
  length_samples INTEGER NOT NULL,
  channels TEXT NOT NULL CHECK (json_valid(channels)),
  created_at_ms INTEGER NOT NULL,
  created_by TEXT NOT NULL,
  created_by_id TEXT REFERENCES person (id) ON DELETE SET NULL,
  settings TEXT NOT NULL CHECK (json_valid(settings)),
  rig TEXT NOT NULL CHECK (json_valid(rig))
) STRICT;
-- the shelf, newest first
CREATE INDEX capture_newest ON capture (kept, created_at_ms, id);
-- the shelf of one rig, newest first
CREATE INDEX capture_of_rig ON capture (rig_id, kept, created_at_ms, id);
-- deleting a person
CREATE INDEX capture_creator ON capture (created_by_id);

CREATE TABLE capture_tag (
  capture_row INTEGER NOT NULL REFERENCES capture (row) ON DELETE CASCADE,
  place INTEGER NOT NULL,
  tag TEXT NOT NULL,
  PRIMARY KEY (capture_row, place)
) STRICT, WITHOUT ROWID;
-- the shelf by tag
CREATE INDEX capture_tag_tag ON capture_tag (tag, capture_row);

CREATE TABLE capture_finding (
  capture_row INTEGER NOT NULL REFERENCES capture (row) ON DELETE CASCADE,
  place INTEGER NOT NULL,
  code TEXT NOT NULL,
  severity TEXT NOT NULL CHECK (severity IN ('note', 'warn', 'fault')),
  count INTEGER NOT NULL,
  PRIMARY KEY (capture_row, place)
) STRICT, WITHOUT ROWID;
-- the shelf by finding
CREATE INDEX capture_finding_code ON capture_finding (code, capture_row);

CREATE TABLE capture_gap (
  capture_row INTEGER NOT NULL REFERENCES capture (row) ON DELETE CASCADE,
  from_index INTEGER NOT NULL,
  lost_samples INTEGER NOT NULL CHECK (lost_samples >= 0),
  estimated INTEGER NOT NULL CHECK (estimated IN (0, 1)),
  PRIMARY KEY (capture_row, from_index)
) STRICT, WITHOUT ROWID;

-- Columns in this order: a level of the pyramid is read without the samples behind it.
CREATE TABLE capture_chunk (
  capture_row INTEGER NOT NULL REFERENCES capture (row) ON DELETE CASCADE,
  channel INTEGER NOT NULL,
  start_index INTEGER NOT NULL,
  count INTEGER NOT NULL CHECK (count > 0),
  sample_type TEXT NOT NULL,
  codec INTEGER NOT NULL,
  coarse BLOB NOT NULL,
  middle BLOB NOT NULL,
  fine BLOB NOT NULL,
  data BLOB NOT NULL,
  PRIMARY KEY (capture_row, channel, start_index)
) STRICT;

-- rowid is capture.row
CREATE VIRTUAL TABLE capture_text USING fts5 (
  title, note, tags, rig_name, tokenize = 'unicode61 remove_diacritics 2', prefix = '2 3'
);
CREATE TRIGGER capture_text_gone AFTER DELETE ON capture BEGIN
  DELETE FROM capture_text WHERE rowid = old.row;
END;

CREATE TABLE audit (
  id INTEGER PRIMARY KEY AUTOINCREMENT,
  at_ms INTEGER NOT NULL,
  actor_id TEXT,
  actor TEXT NOT NULL,
  action TEXT NOT NULL,
  subject TEXT NOT NULL,
  detail TEXT NOT NULL CHECK (json_valid(detail))
) STRICT;
-- the trail of one subject
CREATE INDEX audit_subject ON audit (subject, id);

CREATE TABLE hub_value (key TEXT PRIMARY KEY, value TEXT NOT NULL) STRICT;

CREATE TABLE idempotency (
  rig_id TEXT NOT NULL REFERENCES rig (id) ON DELETE CASCADE,
  key TEXT NOT NULL,
  response TEXT NOT NULL CHECK (json_valid(response)),
  expires_at_ms INTEGER NOT NULL,
  PRIMARY KEY (rig_id, key)
) STRICT;
-- pruning
CREATE INDEX idempotency_expiry ON idempotency (expires_at_ms);
`,
};
