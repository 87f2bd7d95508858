/** The idempotency keys of SenML packs, kept in the database so that they outlive a restart. */
import { forgetResponse, recallResponse, replaceResponse } from '@/db';
import type { TurnmarkDb } from '@/db';
import { idempotencyMs } from '@/ingest/transports/idempotency';
import type { IdempotencyRecord, IdempotencyStore } from '@/ingest/transports/idempotency';
import type { Clock } from './clock';

export function createIdempotencyStore(db: TurnmarkDb, clock: Clock): IdempotencyStore {
  return {
    async find(rigId, key) {
      const record = await recallResponse(db, { rigId, key, nowMs: clock.nowMs() });
      return (record ?? undefined) as IdempotencyRecord | undefined;
    },
    save: (rigId, key, record) =>
      replaceResponse(db, { rigId, key, response: record, expiresAtMs: record.atMs + idempotencyMs }),
    forget: (rigId, key) => forgetResponse(db, rigId, key),
  };
}
