/** One sign-in and all refresh tokens that followed from it. */
export interface SessionFamilyTable {
  id: string;
  person_id: string;
  created_at_ms: number;
  expires_at_ms: number;
  ended_at_ms: number | null;
  newest_counter: number;
}

export interface RefreshTokenTable {
  /** SHA-256, base64url. */
  token_hash: string;
  family_id: string;
  counter: number;
  issued_at_ms: number;
  replaced_at_ms: number | null;
}
