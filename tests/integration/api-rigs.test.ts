import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Problem, Rig, RigKey, RigKeyCreated, SettingsVersion } from '@/server/contract';
import { plainRig, startHub } from './api-harness';
import type { Ask, TestHub } from './api-harness';

type List<T> = { items: T[]; nextCursor: string | null };

let hub: TestHub;
let engineer: Ask;
let admin: Ask;

beforeAll(async () => {
  hub = await startHub();
  engineer = (await hub.signIn('engineer')).ask;
  admin = (await hub.signIn('admin')).ask;
});
afterAll(() => hub.close());

const addRig = async (name: string) =>
  (await engineer<Rig>('POST', '/api/v1/rigs', { ...plainRig, name })).body;
const pointers = (body: unknown) => (body as Problem).errors?.map(({ pointer }) => pointer);

describe('rigs', () => {
  it('are stored with the defaults filled in', async () => {
    const { status, body, headers } = await engineer<Rig>('POST', '/api/v1/rigs', plainRig);
    expect(status).toBe(201);
    expect(body.wheel).toEqual({ pulsesPerTurn: 24, missingPulses: 0, gearRatio: 1, widthClasses: null });
    expect(body.channels[0]?.sensor.kind).toBe('linear');
    expect(headers.get('location')).toBe(`/api/v1/rigs/${body.id}`);
    expect((await engineer('GET', `/api/v1/rigs/${body.id}`)).body).toEqual(body);
  });

  it('are refused with the fields that are wrong', async () => {
    const twice = { ...plainRig, channels: [plainRig.channels[0], plainRig.channels[0]] };
    const refused = await engineer('POST', '/api/v1/rigs', twice);
    expect(refused.status).toBe(422);
    expect(pointers(refused.body)).toEqual(['/channels/1/name', '/channels']);
    const negative = await engineer('POST', '/api/v1/rigs', { ...plainRig, wheel: { pulsesPerTurn: 0 } });
    expect(pointers(negative.body)).toContain('/wheel/pulsesPerTurn');
    const toothless = await engineer('POST', '/api/v1/rigs', {
      ...plainRig,
      wheel: { pulsesPerTurn: 3, missingPulses: 2 },
    });
    expect(pointers(toothless.body)).toEqual(['/wheel/missingPulses']);
  });

  it('change by merging, and are checked as a whole', async () => {
    const rig = await addRig('To change');
    const named = await engineer<Rig>('PATCH', `/api/v1/rigs/${rig.id}`, { name: 'Changed', ratedRpm: 900 });
    expect(named.body).toEqual({ ...rig, name: 'Changed', ratedRpm: 900 });
    const half = await engineer('PATCH', `/api/v1/rigs/${rig.id}`, { sensing: 'quadrature' });
    expect([half.status, pointers(half.body)]).toEqual([422, ['/channels']]);
    expect((await engineer<Rig>('GET', `/api/v1/rigs/${rig.id}`)).body.sensing).toBe('single');
    expect((await engineer('PATCH', '/api/v1/rigs/none', { name: 'x' })).status).toBe(404);
  });

  it('are listed newest first, page by page', async () => {
    for (const name of ['one', 'two', 'three']) await addRig(name);
    const names: string[] = [];
    let path = '/api/v1/rigs?limit=2';
    for (;;) {
      const { body } = await engineer<List<Rig>>('GET', path);
      names.push(...body.items.map((rig) => rig.name));
      expect(body.items.length).toBeLessThanOrEqual(2);
      if (body.nextCursor === null) break;
      path = `/api/v1/rigs?limit=2&cursor=${encodeURIComponent(body.nextCursor)}`;
    }
    expect(names.length).toBe(new Set(names).size);
    expect(names.slice(0, 3)).toEqual(['three', 'two', 'one']);
    expect((await engineer('GET', '/api/v1/rigs?limit=101')).status).toBe(422);
    expect((await engineer('GET', '/api/v1/rigs?cursor=bogus')).status).toBe(422);
  });

  it('go with their keys, by an admin only', async () => {
    const rig = await addRig('To delete');
    const { body } = await engineer<RigKeyCreated>('POST', `/api/v1/rigs/${rig.id}/keys`, { name: 'board' });
    expect((await engineer('DELETE', `/api/v1/rigs/${rig.id}`)).status).toBe(403);
    expect((await admin('DELETE', `/api/v1/rigs/${rig.id}`)).status).toBe(204);
    expect((await admin('DELETE', `/api/v1/rigs/${rig.id}`)).status).toBe(404);
    expect((await engineer('GET', `/api/v1/rigs/${rig.id}/live`)).status).toBe(404);
    const sent = await hub.asking(body.key)('POST', '/ingest/v1/samples', {});
    expect(sent.status).toBe(403);
  });
});

describe('rig keys', () => {
  it('are shown once, listed by name, and revoked at once', async () => {
    const rig = await addRig('With keys');
    const path = `/api/v1/rigs/${rig.id}/keys`;
    const made = await engineer<RigKeyCreated>('POST', path, { name: 'board 1' });
    expect(made.status).toBe(201);
    const list = await engineer<List<RigKey>>('GET', path);
    expect(list.body.items.map(({ name }) => name)).toEqual(['board 1']);
    expect(JSON.stringify(list.body)).not.toContain(made.body.key);
    const other = await addRig('Another');
    expect((await engineer('DELETE', `/api/v1/rigs/${other.id}/keys/${made.body.id}`)).status).toBe(404);
    expect((await engineer('DELETE', `${path}/${made.body.id}`)).status).toBe(204);
    expect((await engineer<List<RigKey>>('GET', path)).body.items).toEqual([]);
    const sent = await hub.asking(made.body.key)('POST', '/ingest/v1/samples', {});
    expect(sent.body).toMatchObject({ type: 'urn:turnmark:problem:key-revoked' });
  });

  it('open nothing but ingest', async () => {
    const rig = await addRig('Curious');
    const { body } = await engineer<RigKeyCreated>('POST', `/api/v1/rigs/${rig.id}/keys`, { name: 'board' });
    expect((await hub.asking(body.key)('GET', '/api/v1/rigs')).status).toBe(401);
  });
});

describe('settings', () => {
  const fixed = { band: { mode: 'fixed', operateV: 2, releaseV: 1 }, reason: 'first try' };

  it('are versions; the newest is in force', async () => {
    const rig = await addRig('Tuned');
    const path = `/api/v1/rigs/${rig.id}/settings`;
    expect((await engineer<List<SettingsVersion>>('GET', path)).body.items).toEqual([]);
    const first = await engineer<SettingsVersion>('POST', path, fixed);
    expect(first.body).toMatchObject({
      version: 1,
      createdBy: 'Jory Pellander',
      filter: { kind: 'none' },
      holdoffS: 0,
    });
    await engineer('POST', path, { ...fixed, reason: 'second' });
    const { body } = await engineer<List<SettingsVersion>>('GET', path);
    expect(body.items.map(({ version }) => version)).toEqual([2, 1]);
    const live = await engineer<{ settingsVersion: number }>('GET', `/api/v1/rigs/${rig.id}/live`);
    expect(live.body.settingsVersion).toBe(2);
  });

  it('are refused where they contradict themselves or the rig', async () => {
    const rig = await addRig('Strict');
    const post = (body: object) =>
      engineer('POST', `/api/v1/rigs/${rig.id}/settings`, { reason: 'test', ...body });
    const upside = await post({ band: { mode: 'fixed', operateV: 1, releaseV: 2 } });
    expect([upside.status, pointers(upside.body)]).toEqual([422, ['/band/operateV']]);
    const order = await post({ filter: { kind: 'lowpass', family: 'butterworth', order: 3, cutoffHz: 100 } });
    expect([order.status, pointers(order.body)]).toEqual([422, ['/filter/order']]);
    const stranger = await post({ band: { ...fixed.band, channels: { Q: { operateV: 2, releaseV: 1 } } } });
    expect([stranger.status, pointers(stranger.body)]).toEqual([422, ['/band/channels/Q']]);
    expect((await post({ reason: '  ' })).status).toBe(422);
  });
});
