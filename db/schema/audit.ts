import type { Generated } from 'kysely';

export interface AuditTable {
  id: Generated<number>;
  at_ms: number;
  actor_id: string | null;
  actor: string;
  action: string;
  subject: string;
  /** JSON object. */
  detail: string;
}
