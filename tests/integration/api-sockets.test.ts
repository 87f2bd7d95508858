import { request } from 'node:http';
import { WebSocket } from 'ws';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { Capture, HubMessage, Rig, RigKeyCreated } from '@/server/contract';
import { plainRig, startHub } from './api-harness';
import type { Ask, TestHub } from './api-harness';

let hub: TestHub;
let engineer: Ask;
let rig: Rig;
let key: RigKeyCreated;
const open: WebSocket[] = [];

beforeEach(async () => {
  hub = await startHub();
  engineer = (await hub.signIn('engineer')).ask;
  rig = (await engineer<Rig>('POST', '/api/v1/rigs', plainRig)).body;
  key = (await engineer<RigKeyCreated>('POST', `/api/v1/rigs/${rig.id}/keys`, { name: 'board' })).body;
});
afterEach(async () => {
  for (const socket of open.splice(0)) socket.terminate();
  await hub.close();
});

const bearer = (token: string) => ({ headers: { Authorization: `Bearer ${token}` } });

function connect(path: string, protocols: string[] = [], options: { headers?: Record<string, string> } = {}) {
  const socket = new WebSocket(hub.url.replace('http', 'ws') + path, protocols, options);
  open.push(socket);
  const messages: Record<string, unknown>[] = [];
  const waiting: (() => void)[] = [];
  socket.on('message', (data) => {
    messages.push(JSON.parse(String(data)) as Record<string, unknown>);
    waiting.splice(0).forEach((go) => go());
  });
  const closed = new Promise<number>((resolve) => socket.once('close', (code) => resolve(code)));
  return {
    socket,
    closed,
    opened: new Promise<void>((resolve, reject) => {
      socket.once('open', resolve);
      socket.once('error', reject);
    }),
    /** The first message, come or coming, that fits. */
    async until<T>(fits: (message: Record<string, unknown>) => boolean): Promise<T> {
      for (;;) {
        const found = messages.find(fits);
        if (found) return found as T;
        await new Promise<void>((go) => waiting.push(go));
      }
    },
    send: (value: unknown) => socket.send(JSON.stringify(value)),
  };
}

/** The answer in HTTP to an upgrade that was refused; undefined where it was hung up. */
function refusal(path: string, headers: Record<string, string> = {}) {
  return new Promise<{ status: number; type: string | undefined; slug: string } | undefined>((resolve) => {
    const upgrade = {
      Connection: 'Upgrade',
      Upgrade: 'websocket',
      'Sec-WebSocket-Version': '13',
      'Sec-WebSocket-Key': 'dGhlIHNhbXBsZSBub25jZQ==',
    };
    const req = request(hub.url + path, { headers: { ...upgrade, ...headers } });
    req.on('response', async (res) => {
      const parts: Buffer[] = [];
      for await (const part of res) parts.push(part as Buffer);
      const { type } = JSON.parse(Buffer.concat(parts).toString()) as { type: string };
      resolve({
        status: res.statusCode ?? 0,
        type: res.headers['content-type'],
        slug: type.split(':').pop() ?? '',
      });
    });
    req.on('error', () => resolve(undefined));
    req.end();
  });
}

const block = (seq: number) => ({
  stream: 'boot',
  seq,
  rate: 1000,
  samples: { A: Array.from({ length: 100 }, () => 1.25) },
});

describe('the boards’ socket', () => {
  it('stores, acks, and what was acked can be kept', async () => {
    const board = connect('/ingest/v1/stream', [], bearer(key.key));
    await board.opened;
    for (let seq = 7; seq < 10; seq++) board.send(block(seq));
    await board.until((message) => (message.ack as { seq?: number } | undefined)?.seq === 9);
    const kept = await engineer<Capture>('POST', `/api/v1/rigs/${rig.id}/captures`, { lastSeconds: 10 });
    expect(kept.body).toMatchObject({ stream: 'boot', durationS: 0.3 });
  });

  it('takes the key as a subprotocol, and answers with the real one only', async () => {
    const board = connect('/ingest/v1/stream', ['turnmark.v1', `bearer.${key.key}`], {
      headers: { Origin: 'https://bench.example' },
    });
    await board.opened;
    expect(board.socket.protocol).toBe('turnmark.v1');
    expect(board.socket.extensions).toBe('');
  });

  it('refuses in HTTP before the upgrade', async () => {
    const path = '/ingest/v1/stream';
    const problem = 'application/problem+json';
    expect(await refusal(path)).toEqual({ status: 401, type: problem, slug: 'no-key' });
    expect(await refusal(path, bearer('made.up.key').headers)).toMatchObject({ status: 401, slug: 'no-key' });
    expect(await refusal(`${path}?key=${key.key}`)).toMatchObject({ status: 401 });
    const { token } = await hub.signIn('admin');
    expect(await refusal(path, bearer(token).headers)).toMatchObject({ status: 401, slug: 'no-key' });
    await engineer('DELETE', `/api/v1/rigs/${rig.id}/keys/${key.id}`);
    expect(await refusal(path, bearer(key.key).headers)).toMatchObject({ status: 403, slug: 'key-revoked' });
    expect(await refusal('/elsewhere', bearer(key.key).headers)).toBeUndefined();
  });

  it('closes with 4403 when the key is revoked, and with 1013 when the hub stops', async () => {
    const other = (await engineer<RigKeyCreated>('POST', `/api/v1/rigs/${rig.id}/keys`, { name: 'other' }))
      .body;
    const board = connect('/ingest/v1/stream', [], bearer(key.key));
    const second = connect('/ingest/v1/stream', [], bearer(other.key));
    await Promise.all([board.opened, second.opened]);
    await engineer('DELETE', `/api/v1/rigs/${rig.id}/keys/${key.id}`);
    expect(await board.closed).toBe(4403);
    expect(second.socket.readyState).toBe(WebSocket.OPEN);
    void hub.close();
    expect(await second.closed).toBe(1013);
  });

  it('closes with 1009 on a message above 1 MiB', async () => {
    const board = connect('/ingest/v1/stream', [], bearer(key.key));
    await board.opened;
    board.socket.send('x'.repeat(1024 * 1024 + 1));
    expect(await board.closed).toBe(1009);
  });

  it('writes refused keys to the audit trail, a row a minute', async () => {
    const { firstPage, listAudit } = await import('@/db');
    await engineer('DELETE', `/api/v1/rigs/${rig.id}/keys/${key.id}`);
    for (let i = 0; i < 3; i++) await refusal('/ingest/v1/stream', bearer(key.key).headers);
    const { items } = await listAudit(hub.context.db, firstPage);
    expect(items.filter(({ action }) => action === 'rig-key.refused').map(({ subject }) => subject)).toEqual([
      rig.id,
    ]);
  });
});

describe('the live socket', () => {
  async function watch() {
    const person = await hub.signIn('reviewer');
    const viewer = connect('/live/v1', [], { headers: { Origin: hub.url } });
    await viewer.opened;
    viewer.send({ type: 'hello', accessToken: person.token });
    await viewer.until<HubMessage>(({ type }) => type === 'welcome');
    return { viewer, person };
  }

  it('shows a rig to a reviewer', async () => {
    const { viewer } = await watch();
    viewer.send({ type: 'watch', rigs: [{ rigId: rig.id }] });
    const frame = await viewer.until<{ live: { state: string } }>(({ type }) => type === 'frame');
    expect(frame.live.state).toBe('waiting');
  });

  it('refuses another page before the upgrade', async () => {
    expect(await refusal('/live/v1', { Origin: 'https://elsewhere.example' })).toMatchObject({
      status: 403,
      slug: 'foreign-origin',
    });
  });

  it('closes on a bad token, on a rig key, and on a message before the token', async () => {
    for (const accessToken of ['made.up.token', key.key]) {
      const viewer = connect('/live/v1');
      await viewer.opened;
      viewer.send({ type: 'hello', accessToken });
      expect(await viewer.closed).toBe(4401);
    }
    const early = connect('/live/v1');
    await early.opened;
    early.send({ type: 'watch', rigs: [] });
    expect(await early.closed).toBe(4401);
  });

  it('closes when the person signs out, here or everywhere', async () => {
    const here = await watch();
    await here.person.ask('DELETE', '/api/v1/session', {});
    expect(await here.viewer.closed).toBe(4401);
    const everywhere = await watch();
    const again = await hub.signIn('reviewer');
    await again.ask('DELETE', '/api/v1/sessions', {});
    expect(await everywhere.viewer.closed).toBe(4401);
  });
});
