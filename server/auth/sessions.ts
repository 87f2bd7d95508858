/** Signing in, staying signed in, signing out. */
import {
  createFamily,
  endAllOfPerson,
  endFamily,
  familyIsActive,
  familyOfToken,
  findPersonByEmail,
  getPerson,
  rotate,
} from '@/db';
import type { Person, TurnmarkDb } from '@/db';
import type { Clock } from '@/server/clock';
import type { Session } from '@/server/contract';
import type { LiveSessions } from '@/server/hub/hub-types';
import type { Passwords } from './passwords';
import { accessTokenLifeS, signAccessToken } from './tokens';

/** A sign-in ends after this, however often it was refreshed. */
export const signInLifeMs = 14 * 24 * 3600 * 1000;

export type SignInResult = { session: Session; refresh: string };
export type RefreshResult =
  | { ok: true; value: SignInResult }
  | { ok: false; why: 'unknown' }
  | { ok: false; why: 'ended' | 'reused'; personId: string };

export type SessionsOptions = {
  db: TurnmarkDb;
  secret: string;
  clock: Clock;
  passwords: Passwords;
  live: LiveSessions;
};

export class Sessions {
  constructor(private readonly options: SessionsOptions) {}

  /** undefined: the two do not go together, whatever the reason. */
  async signIn(email: string, password: string): Promise<SignInResult | undefined> {
    const { db, secret, passwords, clock } = this.options;
    const person = await findPersonByEmail(db, email);
    const stored = person === null || person.disabled ? undefined : (person.passwordHash ?? undefined);
    const right = await passwords.matches(stored, password);
    if (person === null || !right) return undefined;
    const sign = { personId: person.id, secret, nowMs: clock.nowMs(), ttlMs: signInLifeMs };
    const { familyId, token } = await createFamily(db, sign);
    return this.#result(person, familyId, token);
  }

  /** Trades a refresh token for its successor. One that is too old ends the whole sign-in. */
  async refresh(token: string): Promise<RefreshResult> {
    const { db, secret, clock, live } = this.options;
    const rotation = await rotate(db, { token, secret, nowMs: clock.nowMs() });
    if (rotation.result === 'unknown') return { ok: false, why: 'unknown' };
    const { personId, familyId } = rotation;
    if (rotation.result === 'reuse') {
      live.sessionEnded(familyId);
      return { ok: false, why: 'reused', personId };
    }
    const person = await getPerson(db, personId);
    if (rotation.result !== 'ok' || person === null || person.disabled)
      return { ok: false, why: 'ended', personId };
    return { ok: true, value: this.#result(person, familyId, rotation.token) };
  }

  /** Whose refresh token this is; undefined where its sign-in has ended. */
  async ownerOf(token: string): Promise<{ id: string; name: string; familyId: string } | undefined> {
    const { db, clock } = this.options;
    const owner = await familyOfToken(db, token);
    if (owner === null || !(await familyIsActive(db, owner.familyId, clock.nowMs()))) return undefined;
    const person = await getPerson(db, owner.personId);
    return person === null ? undefined : { id: person.id, name: person.name, familyId: owner.familyId };
  }

  async end(familyId: string): Promise<void> {
    await endFamily(this.options.db, familyId, this.options.clock.nowMs());
    this.options.live.sessionEnded(familyId);
  }

  async endAll(personId: string): Promise<void> {
    await endAllOfPerson(this.options.db, personId, this.options.clock.nowMs());
    this.options.live.personChanged(personId);
  }

  #result({ id, email, name, role }: Person, familyId: string, refresh: string): SignInResult {
    const { secret, clock } = this.options;
    return {
      session: {
        accessToken: signAccessToken(secret, id, familyId, clock),
        expiresInS: accessTokenLifeS,
        user: { id, email, name, role },
      },
      refresh,
    };
  }
}
