/** The key itself is never stored: `id` is its `kid`. */
export interface RigKeyTable {
  id: string;
  rig_id: string;
  name: string;
  created_at_ms: number;
  created_by: string;
  created_by_id: string | null;
  revoked_at_ms: number | null;
  last_used_at_ms: number | null;
}
