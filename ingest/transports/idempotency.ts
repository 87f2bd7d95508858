/** What is remembered of an `Idempotency-Key`, so that a repeated POST is harmless. */
export type IdempotencyRecord = {
  stream: string;
  /** SHA-256 of the body, hex: the same key with another body is a mistake. */
  digest: string;
  /** When the key first came, Unix ms. */
  atMs: number;
  /** undefined while the first request has not been answered (or was cut off). */
  result: { seq: number; samples: number } | undefined;
};

/** Kept by the hub, per rig, for `idempotencyMs`. */
export type IdempotencyStore = {
  find(rigId: string, key: string): Promise<IdempotencyRecord | undefined>;
  save(rigId: string, key: string, record: IdempotencyRecord): Promise<void>;
  forget(rigId: string, key: string): Promise<void>;
};

export const idempotencyMs = 24 * 3600 * 1000;

/** A store in memory, for tests and for programs that need no more. Forgets by age on every save. */
export function createIdempotencyMemory(nowMs: () => number): IdempotencyStore {
  const records = new Map<string, IdempotencyRecord>();
  const id = (rigId: string, key: string): string => JSON.stringify([rigId, key]);
  return {
    find: async (rigId, key) => records.get(id(rigId, key)),
    save: async (rigId, key, record) => {
      for (const [old, { atMs }] of records) if (nowMs() - atMs >= idempotencyMs) records.delete(old);
      records.set(id(rigId, key), record);
    },
    forget: async (rigId, key) => {
      records.delete(id(rigId, key));
    },
  };
}
