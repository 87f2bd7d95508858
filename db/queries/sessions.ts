/**
 * Sign-ins. A family is one sign-in and the chain of refresh tokens that followed from it. The newest token is good
 * until the family expires; the one before it stays good for `graceMs` after its replacement and yields the same
 * successor; any older one ends the family, since only a thief or a copy would hold it.
 */
import { newId } from '../ids';
import type { TurnmarkDb } from '../schema';
import { deriveRefreshToken, hashRefreshToken } from './refresh-token';

export const graceMs = 20_000;

export type IssuedToken = { familyId: string; personId: string; token: string; expiresAtMs: number };
export type Rotation =
  | ({ result: 'ok' } & IssuedToken)
  /** An old token came back: the family has been ended by this call. */
  | { result: 'reuse'; familyId: string; personId: string }
  | { result: 'expired' | 'ended'; familyId: string; personId: string }
  | { result: 'unknown' };

type Secret = string | Uint8Array;

/** A new sign-in that lasts `ttlMs` at most, however often its token is rotated. */
export async function createFamily(
  db: TurnmarkDb,
  sign: { personId: string; secret: Secret; nowMs: number; ttlMs: number },
): Promise<IssuedToken> {
  const familyId = newId();
  const expiresAtMs = sign.nowMs + sign.ttlMs;
  return await db.transaction().execute(async (trx) => {
    await trx
      .insertInto('session_family')
      .values({
        id: familyId,
        person_id: sign.personId,
        created_at_ms: sign.nowMs,
        expires_at_ms: expiresAtMs,
        ended_at_ms: null,
        newest_counter: 0,
      })
      .execute();
    const token = await issue(trx, sign.secret, familyId, 0, sign.nowMs);
    return { familyId, personId: sign.personId, token, expiresAtMs };
  });
}

/** Trades a refresh token for its successor. */
export async function rotate(
  db: TurnmarkDb,
  { token, secret, nowMs }: { token: string; secret: Secret; nowMs: number },
): Promise<Rotation> {
  return await db.transaction().execute(async (trx) => {
    const held = await trx
      .selectFrom('refresh_token as t')
      .innerJoin('session_family as f', 'f.id', 't.family_id')
      .selectAll('f')
      .select(['t.counter', 't.replaced_at_ms'])
      .where('t.token_hash', '=', hashRefreshToken(token))
      .executeTakeFirst();
    if (held === undefined) return { result: 'unknown' };
    const family = { familyId: held.id, personId: held.person_id };
    if (held.ended_at_ms !== null) return { result: 'ended', ...family };
    if (held.expires_at_ms <= nowMs) return { result: 'expired', ...family };

    const expiresAtMs = held.expires_at_ms;
    const next = held.counter + 1;
    if (held.counter === held.newest_counter) {
      await trx
        .updateTable('refresh_token')
        .set({ replaced_at_ms: nowMs })
        .where('family_id', '=', held.id)
        .where('counter', '=', held.counter)
        .execute();
      await trx
        .updateTable('session_family')
        .set({ newest_counter: next })
        .where('id', '=', held.id)
        .execute();
      return { result: 'ok', ...family, token: await issue(trx, secret, held.id, next, nowMs), expiresAtMs };
    }
    const sinceMs = nowMs - (held.replaced_at_ms ?? -Infinity);
    if (next === held.newest_counter && sinceMs <= graceMs) {
      return { result: 'ok', ...family, token: deriveRefreshToken(secret, held.id, next), expiresAtMs };
    }
    await endFamily(trx, held.id, nowMs);
    return { result: 'reuse', ...family };
  });
}

/** The family of a token, whatever its state: for signing out. */
export async function familyOfToken(
  db: TurnmarkDb,
  token: string,
): Promise<{ familyId: string; personId: string } | null> {
  const row = await db
    .selectFrom('refresh_token as t')
    .innerJoin('session_family as f', 'f.id', 't.family_id')
    .select(['f.id', 'f.person_id'])
    .where('t.token_hash', '=', hashRefreshToken(token))
    .executeTakeFirst();
  return row === undefined ? null : { familyId: row.id, personId: row.person_id };
}

/** Neither ended nor expired, and its person not disabled. */
export async function familyIsActive(db: TurnmarkDb, familyId: string, nowMs: number): Promise<boolean> {
  const row = await db
    .selectFrom('session_family as f')
    .innerJoin('person as p', 'p.id', 'f.person_id')
    .select('f.id')
    .where('f.id', '=', familyId)
    .where('f.ended_at_ms', 'is', null)
    .where('f.expires_at_ms', '>', nowMs)
    .where('p.disabled', '=', 0)
    .executeTakeFirst();
  return row !== undefined;
}

export async function endFamily(db: TurnmarkDb, familyId: string, nowMs: number): Promise<void> {
  await db
    .updateTable('session_family')
    .set({ ended_at_ms: nowMs })
    .where('id', '=', familyId)
    .where('ended_at_ms', 'is', null)
    .execute();
}

/** Gives back the families that were open. */
export async function endAllOfPerson(db: TurnmarkDb, personId: string, nowMs: number): Promise<string[]> {
  const rows = await db
    .updateTable('session_family')
    .set({ ended_at_ms: nowMs })
    .where('person_id', '=', personId)
    .where('ended_at_ms', 'is', null)
    .returning('id')
    .execute();
  return rows.map((row) => row.id);
}

/** Drops expired families with their tokens; how many. */
export async function pruneSessions(db: TurnmarkDb, nowMs: number): Promise<number> {
  const { numDeletedRows } = await db
    .deleteFrom('session_family')
    .where('expires_at_ms', '<=', nowMs)
    .executeTakeFirst();
  return Number(numDeletedRows);
}

async function issue(
  db: TurnmarkDb,
  secret: Secret,
  familyId: string,
  counter: number,
  nowMs: number,
): Promise<string> {
  const token = deriveRefreshToken(secret, familyId, counter);
  await db
    .insertInto('refresh_token')
    .values({
      token_hash: hashRefreshToken(token),
      family_id: familyId,
      counter,
      issued_at_ms: nowMs,
      replaced_at_ms: null,
    })
    .execute();
  return token;
}
