/** Who is calling, and may they. Person, role and sign-in are looked up at each request, so that a change counts at once. */
import type { Request } from 'express';
import type { Role, User } from '@/server/contract';
import { roleAtLeast } from '@/server/contract';
import { familyIsActive, getPerson } from '@/db';
import type { TurnmarkDb } from '@/db';
import type { Clock } from '@/server/clock';
import { ApiProblem } from '@/server/http/problems';
import { bearerOf, readAccessToken } from './tokens';

export type SignedIn = User & { familyId: string; expiresAtMs: number };

/** Stands in on routes that need no sign-in; may do nothing. */
export const nobody: SignedIn = {
  id: '',
  email: '',
  name: '',
  role: 'reviewer',
  familyId: '',
  expiresAtMs: 0,
};

/** Throws a problem unless the caller has at least this role. */
export type Authenticate = (req: Request, wanted: Role) => Promise<SignedIn>;

/** undefined: not a good token, or its sign-in has ended. */
export type ReadToken = (accessToken: string) => Promise<SignedIn | undefined>;

export type Refusal = {
  why: 'forbidden';
  person: SignedIn;
  method: string;
  path: string;
  address: string | undefined;
};

export function createReadToken(options: { secret: string; clock: Clock; db: TurnmarkDb }): ReadToken {
  const { secret, clock, db } = options;
  return async (accessToken) => {
    const claims = readAccessToken(accessToken, secret, clock);
    if (claims === undefined) return undefined;
    const { personId, familyId, expiresAtMs } = claims;
    if (!(await familyIsActive(db, familyId, clock.nowMs()))) return undefined;
    const person = await getPerson(db, personId);
    if (person === null) return undefined;
    const { id, email, name, role } = person;
    return { id, email, name, role, familyId, expiresAtMs };
  };
}

export function createAuthenticate(
  readToken: ReadToken,
  onRefused: (refusal: Refusal) => Promise<void>,
): Authenticate {
  return async (req, wanted) => {
    const token = bearerOf(req.headers.authorization);
    if (token === undefined) {
      throw new ApiProblem('not-signed-in', { headers: { 'WWW-Authenticate': 'Bearer' } });
    }
    const person = await readToken(token);
    if (person === undefined) {
      throw new ApiProblem('not-signed-in', {
        detail: 'The sign-in has ended or expired.',
        headers: { 'WWW-Authenticate': 'Bearer error="invalid_token"' },
      });
    }
    if (!roleAtLeast(person.role, wanted)) {
      const { method, path, ip } = req;
      await onRefused({ why: 'forbidden', person, method, path: `${req.baseUrl}${path}`, address: ip });
      throw new ApiProblem('forbidden', {
        detail: `This needs the role ${wanted}; yours is ${person.role}.`,
        headers: { 'WWW-Authenticate': 'Bearer error="insufficient_scope"' },
      });
    }
    return person;
  };
}
