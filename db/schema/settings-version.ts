export interface SettingsVersionTable {
  rig_id: string;
  version: number;
  /** JSON of `Settings`. */
  settings: string;
  reason: string;
  created_at_ms: number;
  created_by: string;
  created_by_id: string | null;
}
