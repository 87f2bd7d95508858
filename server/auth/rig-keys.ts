/**
 * Rig keys: what lets a board send for its rig, and nothing else. The hub keeps a key's id and state, never the key.
 * The good ones are held in memory, so that the check is synchronous and a revocation counts from the next message on.
 */
import type { Clock } from '@/server/clock';
import { readRigKey, signRigKey } from './tokens';

type Named = { rigId: string; keyId: string };
export type VerifiedKey =
  ({ ok: true } & Named) | { ok: false; slug: 'no-key' } | ({ ok: false; slug: 'key-revoked' } & Named);

export type RigKeyOptions = {
  secret: string;
  clock: Clock;
  /** The keys that are good now. */
  good: readonly Named[];
  /** Told at most once a minute for each key. */
  onUsed(keyId: string, atMs: number): void;
};

const usedEveryMs = 60_000;

export class RigKeys {
  readonly #good = new Map<string, { rigId: string; usedMs: number }>();

  constructor(private readonly options: RigKeyOptions) {
    for (const { keyId, rigId } of options.good) this.#good.set(keyId, { rigId, usedMs: -Infinity });
  }

  /** The text of a key whose row exists; it is shown once and counts from here on. */
  issue({ keyId, rigId }: Named): string {
    this.#good.set(keyId, { rigId, usedMs: -Infinity });
    return signRigKey(this.options.secret, keyId, rigId, this.options.clock);
  }

  revoke(keyId: string): void {
    this.#good.delete(keyId);
  }

  /** All keys of a rig that is going; says which they were. */
  revokeRig(rigId: string): string[] {
    const ended = [...this.#good].filter(([, key]) => key.rigId === rigId).map(([keyId]) => keyId);
    for (const keyId of ended) this.#good.delete(keyId);
    return ended;
  }

  verify(token: string | undefined): VerifiedKey {
    const claims =
      token === undefined ? undefined : readRigKey(token, this.options.secret, this.options.clock);
    if (claims === undefined) return { ok: false, slug: 'no-key' };
    const key = this.#good.get(claims.keyId);
    // Signed by us and not among the good ones: it was revoked, or its rig is gone.
    if (key === undefined || key.rigId !== claims.rigId) return { ok: false, slug: 'key-revoked', ...claims };
    const nowMs = this.options.clock.nowMs();
    if (nowMs - key.usedMs >= usedEveryMs) {
      key.usedMs = nowMs;
      this.options.onUsed(claims.keyId, nowMs);
    }
    return { ok: true, ...claims };
  }
}
