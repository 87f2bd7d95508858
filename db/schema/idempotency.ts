export interface IdempotencyTable {
  rig_id: string;
  key: string;
  /** JSON. */
  response: string;
  expires_at_ms: number;
}
