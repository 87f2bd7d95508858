import type { Kysely } from 'kysely';
import type { AuditTable } from './audit';
import type {
  CaptureFindingTable,
  CaptureGapTable,
  CaptureTable,
  CaptureTagTable,
  CaptureTextTable,
} from './capture';
import type { CaptureChunkTable } from './capture-chunk';
import type { HubValueTable } from './hub-value';
import type { IdempotencyTable } from './idempotency';
import type { PersonTable } from './person';
import type { RigTable } from './rig';
import type { RigKeyTable } from './rig-key';
import type { RefreshTokenTable, SessionFamilyTable } from './session';
import type { SettingsVersionTable } from './settings-version';

/** Tables of `turnmark.db`. */
export interface TurnmarkSchema {
  person: PersonTable;
  session_family: SessionFamilyTable;
  refresh_token: RefreshTokenTable;
  rig: RigTable;
  rig_key: RigKeyTable;
  settings_version: SettingsVersionTable;
  capture: CaptureTable;
  capture_tag: CaptureTagTable;
  capture_finding: CaptureFindingTable;
  capture_gap: CaptureGapTable;
  capture_chunk: CaptureChunkTable;
  capture_text: CaptureTextTable;
  audit: AuditTable;
  hub_value: HubValueTable;
  idempotency: IdempotencyTable;
}

export type TurnmarkDb = Kysely<TurnmarkSchema>;
