import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import jwt from 'jsonwebtoken';
import { firstPage, listAudit } from '@/db';
import type { Role } from '@/server/contract';
import { roleAtLeast } from '@/server/contract';
import { apiRoutes } from '@/server/routes';
import type { Route } from '@/server/http/route';
import { plainRig, roles, startHub } from './api-harness';
import type { Ask, TestHub } from './api-harness';

let hub: TestHub;
let routes: Route[];
const asks: Partial<Record<Role, Ask>> = {};
const refused: Record<string, string> = {};

/** `typ`, claims and secret as told; all else as the hub itself would sign it. */
function forged(
  change: { secret?: string; typ?: string; aud?: string; exp?: number; alg?: jwt.Algorithm },
  real: string,
) {
  const { sub, sid } = jwt.decode(real) as { sub: string; sid: string };
  const nowS = Math.floor(Date.now() / 1000);
  const payload = {
    sub,
    sid,
    iss: 'turnmark',
    aud: change.aud ?? 'api',
    iat: nowS,
    exp: change.exp ?? nowS + 900,
  };
  const alg = change.alg ?? 'HS256';
  const secret = alg === 'none' ? '' : (change.secret ?? hub.context.secrets.session);
  return jwt.sign(payload, secret, { algorithm: alg, header: { alg, typ: change.typ ?? 'at+jwt' } });
}

beforeAll(async () => {
  hub = await startHub();
  routes = apiRoutes(hub.context);
  for (const role of roles) asks[role] = (await hub.signIn(role)).ask;
  const { token } = await hub.signIn('admin');
  const ended = await hub.signIn('admin');
  await ended.ask('DELETE', '/api/v1/session', {});
  const rig = await asks.engineer!<{ id: string }>('POST', '/api/v1/rigs', plainRig);
  const key = await asks.engineer!<{ key: string }>('POST', `/api/v1/rigs/${rig.body.id}/keys`, {
    name: 'board',
  });
  Object.assign(refused, {
    expired: forged({ exp: Math.floor(Date.now() / 1000) - 60 }, token),
    'signed out': ended.token,
    'signed with another secret': forged({ secret: 'x'.repeat(43) }, token),
    'signed with the rig secret': forged({ secret: hub.context.secrets.ingest }, token),
    'for another audience': forged({ aud: 'ingest' }, token),
    'of another type': forged({ typ: 'JWT' }, token),
    'without a signature': forged({ alg: 'none' }, token),
    'of another algorithm': forged({ alg: 'HS512' }, token),
    'a rig key': key.body.key,
    garbage: 'not.a.token',
  });
});
afterAll(() => hub.close());

const pathOf = (route: Route) => `/api/v1${route.path.replaceAll(/:\w+/g, 'nothing-of-this-name')}`;
const call = (ask: Ask, route: Route) =>
  ask(route.method.toUpperCase(), pathOf(route), route.method === 'get' ? undefined : {});

describe('access to every route', () => {
  it('is tested on the routes of the API, not on none', () => {
    expect(routes.length).toBeGreaterThanOrEqual(15);
  });

  it('demands a good token', async () => {
    for (const route of routes.filter(({ access }) => access !== 'all')) {
      const where = `${route.method} ${route.path}`;
      expect((await call(hub.anyone, route)).status, `${where}, no token`).toBe(401);
      for (const [what, token] of Object.entries(refused)) {
        expect((await call(hub.asking(token), route)).status, `${where}, token ${what}`).toBe(401);
      }
    }
  });

  it('demands the role', async () => {
    for (const route of routes) {
      const { access } = route;
      if (access === 'all') continue;
      for (const role of roles) {
        const { status } = await call(asks[role]!, route);
        const where = `${route.method} ${route.path} as ${role}`;
        if (!roleAtLeast(role, access)) expect(status, where).toBe(403);
        // Let in: what comes then is about what was asked for, which does not exist.
        else expect([200, 404, 415, 422], where).toContain(status);
      }
    }
  });

  it('opens nothing without a sign-in but signing in and refreshing', () => {
    const open = routes
      .filter(({ access }) => access === 'all')
      .map(({ method, path }) => `${method} ${path}`);
    expect(open.sort()).toEqual([
      'delete /session',
      'delete /sessions',
      'post /session',
      'post /session/refresh',
    ]);
  });

  it('writes refusals to the audit trail', async () => {
    const { items } = await listAudit(hub.context.db, firstPage);
    const row = items.find(
      ({ action, subject }) => action === 'access.forbidden' && subject === '/api/v1/rigs',
    );
    expect(row).toMatchObject({ actor: 'Sunniva Okar', detail: { method: 'POST' } });
  });

  it('refuses a person whose role was lowered, at once', async () => {
    const { ask, user } = await hub.signIn('admin');
    const { updatePerson } = await import('@/db');
    expect((await ask('DELETE', '/api/v1/rigs/nothing')).status).toBe(404);
    await updatePerson(hub.context.db, user.id, { role: 'reviewer', nowMs: Date.now() });
    expect((await ask('DELETE', '/api/v1/rigs/nothing')).status).toBe(401);
    const again = await hub.signIn('admin');
    expect((await again.ask('DELETE', '/api/v1/rigs/nothing')).status).toBe(403);
  });
});

describe('what is not there', () => {
  it('is a problem under /api, and never the page', async () => {
    const lost = await hub.anyone('GET', '/api/v1/nothing', undefined, { Accept: 'text/html' });
    expect([lost.status, lost.headers.get('content-type')]).toEqual([
      404,
      'application/problem+json; charset=utf-8',
    ]);
    const method = await asks.admin!('PUT', '/api/v1/rigs', {});
    expect([method.status, method.headers.get('allow')]).toEqual([405, 'GET, POST']);
  });
});
