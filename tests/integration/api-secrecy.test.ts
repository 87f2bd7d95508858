import { request } from 'node:http';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { sql } from 'kysely';
import type { Rig, RigKeyCreated } from '@/server/contract';
import { password, plainRig, startHub } from './api-harness';
import type { TestHub } from './api-harness';

let hub: TestHub;
const secrets: Record<string, string> = {};

beforeAll(async () => {
  hub = await startHub();
  const { ask, token, cookie } = await hub.signIn('engineer');
  const rig = (await ask<Rig>('POST', '/api/v1/rigs', plainRig)).body;
  const { key } = (await ask<RigKeyCreated>('POST', `/api/v1/rigs/${rig.id}/keys`, { name: 'board' })).body;
  const refresh = cookie.split('=')[1]!;
  await hub.anyone('POST', '/api/v1/session/refresh', {}, { Cookie: cookie, Origin: hub.url });
  await hub.anyone('POST', '/api/v1/session', {
    email: 'engineer@turnmark.example',
    password: 'wrong-guess-9',
  });
  await hub.asking(key)('POST', '/ingest/v1/samples', '{broken', { 'Content-Type': 'application/json' });
  await hub.anyone('GET', `/api/v1/rigs?token=${token}`);
  // A failure that nobody foresaw, with everything at hand that must not be told.
  const { body } = await failing(ask);
  secrets.answer = JSON.stringify(body);
  await new Promise<void>((resolve) => {
    const headers = {
      Connection: 'Upgrade',
      Upgrade: 'websocket',
      'Sec-WebSocket-Version': '13',
      'Sec-WebSocket-Key': 'dGhlIHNhbXBsZSBub25jZQ==',
      'Sec-WebSocket-Protocol': `turnmark.v1, bearer.${key}`,
    };
    const req = request(`${hub.url}/ingest/v1/stream`, { headers });
    req.on('upgrade', (_res, socket) => {
      socket.destroy();
      resolve();
    });
    req.end();
  });
  hub.context.log.info(
    {
      req: {
        headers: { authorization: `Bearer ${token}`, cookie, 'sec-websocket-protocol': `bearer.${key}` },
      },
      password,
    },
    'written by mistake',
  );
  Object.assign(secrets, { token, key, refresh, guess: 'wrong-guess-9', password });
});
afterAll(() => hub.close());

async function failing(ask: Awaited<ReturnType<TestHub['signIn']>>['ask']) {
  const { hub: running } = hub.context;
  const { live } = running;
  running.live = () => {
    throw new Error('the table of the cellar is locked');
  };
  const { items } = (await ask<{ items: Rig[] }>('GET', '/api/v1/rigs')).body;
  const answer = await ask('GET', `/api/v1/rigs/${items[0]!.id}/live`);
  running.live = live;
  return answer;
}

describe('secrets', () => {
  it('never reach the log, which was written', () => {
    const logged = hub.logged();
    expect(logged).toContain('written by mistake');
    expect(logged).toContain('/api/v1/rigs');
    expect(logged).toContain('the table of the cellar is locked');
    for (const name of ['token', 'key', 'refresh', 'guess', 'password']) {
      expect(logged.includes(secrets[name]!), name).toBe(false);
    }
    expect(logged).not.toContain(hub.context.secrets.session);
    expect(logged).not.toContain(hub.context.secrets.ingest);
  });

  it('are not in the database, nor in the figures', async () => {
    const { rows: tables } = await sql<{
      name: string;
    }>`SELECT name FROM sqlite_schema WHERE type = 'table'`.execute(hub.context.db);
    expect(tables.length).toBeGreaterThan(8);
    let all = '';
    for (const { name } of tables)
      all += JSON.stringify((await sql`SELECT * FROM ${sql.table(name)}`.execute(hub.context.db)).rows);
    expect(all).toContain('engineer@turnmark.example');
    const { body: metrics } = await hub.anyone<string>('GET', '/metrics');
    expect(metrics).toContain('turnmark_http_request_seconds_count');
    for (const name of ['token', 'key', 'refresh', 'guess', 'password']) {
      expect(all.includes(secrets[name]!), name).toBe(false);
      expect(metrics.includes(secrets[name]!), name).toBe(false);
    }
  });

  it('and the reason of an unknown failure stay in the hub', () => {
    expect(secrets.answer).toContain('urn:turnmark:problem:internal');
    expect(secrets.answer).not.toContain('cellar');
  });
});

describe('for those who run it', () => {
  it('says that it is up and can store', async () => {
    expect((await hub.anyone('GET', '/healthz')).body).toEqual({ status: 'up' });
    expect((await hub.anyone('GET', '/readyz')).body).toEqual({ status: 'ready' });
  });
});
