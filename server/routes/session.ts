/** Signing in and out. All of these demand JSON; a browser's page must be the hub's own. */
import type { Request, Response } from 'express';
import type { ReadToken } from '@/server/auth/authenticate';
import type { AttemptLimits } from '@/server/auth/attempt-limits';
import { attemptLimiters } from '@/server/auth/attempt-limits';
import type { RefreshCookie } from '@/server/auth/refresh-cookie';
import type { Sessions } from '@/server/auth/sessions';
import { bearerOf } from '@/server/auth/tokens';
import { actorOf } from '@/server/audit';
import type { Audit } from '@/server/audit';
import { session, signIn, user } from '@/server/contract';
import type { OriginCheck } from '@/server/http/origin';
import { ApiProblem } from '@/server/http/problems';
import type { Route } from '@/server/http/route';
import { route } from '@/server/http/route';

export type SessionRoutesDeps = {
  sessions: Sessions;
  readToken: ReadToken;
  cookie: RefreshCookie;
  origin: OriginCheck;
  limits: AttemptLimits;
  audit: Audit;
};

const tag = 'Sign-in';
const notSignedIn = (detail: string) =>
  new ApiProblem('not-signed-in', { detail, headers: { 'WWW-Authenticate': 'Bearer' } });

export function sessionRoutes(deps: SessionRoutesDeps): Route[] {
  const { sessions, readToken, cookie, origin, audit } = deps;

  function refuseForeign(req: Request): void {
    if (origin.isOwn(req) === false) throw new ApiProblem('foreign-origin');
  }

  /** The cookie comes by itself with any request of a browser: only the hub's own page may use it. */
  function cookieOfOwnPage(req: Request): string | undefined {
    const token = cookie.read(req);
    if (token !== undefined && origin.isOwn(req) !== true) {
      throw new ApiProblem('foreign-origin', {
        detail: 'The cookie counts only with the Origin of the hub itself.',
      });
    }
    return token;
  }

  /** By access token, else by cookie. */
  async function caller(req: Request): Promise<{ id: string; name: string; familyId: string } | undefined> {
    const bearer = bearerOf(req.headers.authorization);
    const person = bearer === undefined ? undefined : await readToken(bearer);
    if (person !== undefined) return person;
    const token = cookieOfOwnPage(req);
    return token === undefined ? undefined : sessions.ownerOf(token);
  }

  /** Who signs out, here or everywhere; the cookie goes either way. */
  async function leaving(req: Request, res: Response) {
    refuseForeign(req);
    const who = await caller(req);
    cookie.clear(res);
    if (who === undefined) throw notSignedIn('There is no sign-in to end.');
    return who;
  }

  return [
    route({
      method: 'post',
      path: '/session',
      access: 'all',
      tag,
      summary: 'Sign in',
      body: signIn,
      before: attemptLimiters(deps.limits),
      answers: [
        { status: 200, description: 'Signed in; the refresh token comes as a cookie', schema: session },
      ],
      problems: ['not-signed-in', 'foreign-origin', 'invalid', 'content-type', 'too-many-requests'],
      async handle({ req, res, body }) {
        refuseForeign(req);
        const result = await sessions.signIn(body.email, body.password);
        if (result === undefined) {
          await audit.signInRefused(body.email, req.ip);
          throw notSignedIn('That e-mail and password do not go together.');
        }
        await audit.signedIn(actorOf(result.session.user), req.ip);
        cookie.set(res, result.refresh);
        return { status: 200, body: result.session };
      },
    }),
    route({
      method: 'post',
      path: '/session/refresh',
      access: 'all',
      tag,
      summary: 'A new access token, by the cookie',
      description:
        'The refresh token before stays good for 20 s. An older one, used again, ends the sign-in.',
      demandsJson: true,
      answers: [{ status: 200, description: 'A fresh access token and cookie', schema: session }],
      problems: ['not-signed-in', 'foreign-origin', 'content-type'],
      async handle({ req, res }) {
        refuseForeign(req);
        const token = cookieOfOwnPage(req);
        if (token === undefined) throw notSignedIn('There is no sign-in to refresh.');
        const result = await sessions.refresh(token);
        if (!result.ok) {
          if (result.why === 'reused') await audit.refreshReused(result.personId, req.ip);
          cookie.clear(res);
          throw notSignedIn('The sign-in has ended.');
        }
        cookie.set(res, result.value.refresh);
        return { status: 200, body: result.value.session };
      },
    }),
    route({
      method: 'delete',
      path: '/session',
      access: 'all',
      tag,
      summary: 'Sign out here',
      description: 'By access token, or by the cookie from the hub’s own page.',
      demandsJson: true,
      answers: [{ status: 204, description: 'Signed out' }],
      problems: ['not-signed-in', 'foreign-origin', 'content-type'],
      async handle({ req, res }) {
        const who = await leaving(req, res);
        await sessions.end(who.familyId);
        await audit.signedOut(actorOf(who), req.ip);
        return { status: 204 };
      },
    }),
    route({
      method: 'delete',
      path: '/sessions',
      access: 'all',
      tag,
      summary: 'Sign out everywhere',
      demandsJson: true,
      answers: [{ status: 204, description: 'Signed out everywhere; live sockets are closed' }],
      problems: ['not-signed-in', 'foreign-origin', 'content-type'],
      async handle({ req, res }) {
        const who = await leaving(req, res);
        await sessions.endAll(who.id);
        await audit.signedOutEverywhere(actorOf(who), req.ip);
        return { status: 204 };
      },
    }),
    route({
      method: 'get',
      path: '/me',
      access: 'reviewer',
      tag,
      summary: 'Who I am',
      answers: [{ status: 200, description: 'The signed-in person', schema: user }],
      problems: ['not-signed-in'],
      handle: ({ user: { id, email, name, role } }) => ({ status: 200, body: { id, email, name, role } }),
    }),
  ];
}
