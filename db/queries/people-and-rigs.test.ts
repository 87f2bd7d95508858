import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { Databases } from '../open';
import { inMemory, nobody, settings, setup } from '../test-support/rig';
import { listAudit, writeAudit } from './audit';
import { getHubValue, setHubValue } from './hub-values';
import { forgetResponse, pruneResponses, recallResponse, replaceResponse } from './idempotency';
import { createKey, findKey, listKeys, revokeKey, touchKey } from './keys';
import { decodeCursor, firstPage } from './page';
import {
  countAdmins,
  createPerson,
  deletePerson,
  findPersonByEmail,
  getPerson,
  listPeople,
  updatePerson,
} from './people';
import { allRigs, createRig, deleteRig, getRig, listRigs, updateRig } from './rigs';
import { addSettings, listSettings, newestSettings } from './settings';

let databases: Databases;
beforeEach(() => {
  databases = inMemory();
});
afterEach(() => databases.close());

const newPerson = (email: string, role: 'admin' | 'engineer' = 'engineer') =>
  createPerson(databases.db, { email, name: 'Ada', role, passwordHash: 'hash', nowMs: 1 });
const newRig = (name = 'Vent winch', nowMs = 1) => createRig(databases.db, { name, setup, nowMs });

async function personId(email: string): Promise<string> {
  const made = await newPerson(email);
  if (!made.ok) throw new Error(made.issue.code);
  return made.value.id;
}

describe('people', () => {
  it('are one for each address, whatever its case', async () => {
    const id = await personId(' Ada.Ünal@Lab.example ');
    expect(await newPerson('ada.ünal@lab.EXAMPLE')).toEqual({ ok: false, issue: { code: 'email-taken' } });
    const found = await findPersonByEmail(databases.db, 'ADA.ÜNAL@lab.example');
    expect(found).toEqual({
      id,
      email: 'Ada.Ünal@Lab.example',
      name: 'Ada',
      role: 'engineer',
      disabled: false,
      createdAt: '1970-01-01T00:00:00.001Z',
      passwordHash: 'hash',
    });
    expect(await getPerson(databases.db, id)).not.toHaveProperty('passwordHash');
    expect(await findPersonByEmail(databases.db, 'nobody@lab.example')).toBeNull();
  });

  it('change, are counted and are listed newest first', async () => {
    const id = await personId('a@lab.example');
    await createPerson(databases.db, {
      email: 'b@lab.example',
      name: 'B',
      role: 'admin',
      passwordHash: null,
      nowMs: 5,
    });
    expect(await countAdmins(databases.db)).toBe(1);
    expect(await updatePerson(databases.db, id, { role: 'admin', name: 'New', nowMs: 6 })).toMatchObject({
      role: 'admin',
      name: 'New',
    });
    expect(await countAdmins(databases.db)).toBe(2);
    await updatePerson(databases.db, id, { disabled: true, nowMs: 7 });
    expect(await countAdmins(databases.db)).toBe(1);
    expect((await listPeople(databases.db, firstPage)).items.map((p) => p.email)).toEqual([
      'b@lab.example',
      'a@lab.example',
    ]);
    expect(await updatePerson(databases.db, 'no such', { name: 'x', nowMs: 7 })).toBeNull();
  });

  it('leave their name on what they made', async () => {
    const by = { id: await personId('a@lab.example'), name: 'Ada' };
    const rig = await newRig();
    const key = await createKey(databases.db, { rigId: rig.id, name: 'bench', by, nowMs: 2 });
    await addSettings(databases.db, { rigId: rig.id, settings, reason: 'first', by, nowMs: 2 });
    expect(await deletePerson(databases.db, by.id)).toBe(true);
    expect(await deletePerson(databases.db, by.id)).toBe(false);
    expect((await findKey(databases.db, key.id))?.createdBy).toBe('Ada');
    expect((await newestSettings(databases.db, rig.id))?.createdBy).toBe('Ada');
  });
});

describe('rigs', () => {
  it('come back as they were given', async () => {
    const rig = await newRig();
    expect(rig).toEqual({ id: rig.id, name: 'Vent winch', createdAt: '1970-01-01T00:00:00.001Z', ...setup });
    expect(await getRig(databases.db, rig.id)).toEqual(rig);
    const changed = await updateRig(databases.db, rig.id, {
      name: 'Mixer',
      setup: { ...setup, ratedRpm: 3000 },
    });
    expect(changed).toMatchObject({ name: 'Mixer', ratedRpm: 3000 });
    expect(await getRig(databases.db, rig.id)).toEqual(changed);
    expect(await updateRig(databases.db, 'no such', { name: 'x', setup })).toBeNull();
  });

  it('are paged newest first', async () => {
    for (let i = 0; i < 7; i++) await newRig(`rig ${i}`, i);
    const first = await listRigs(databases.db, { cursor: null, limit: 4 });
    const cursor = decodeCursor(first.nextCursor);
    const second = await listRigs(databases.db, { cursor: cursor.ok ? cursor.value : null, limit: 4 });
    expect([...first.items, ...second.items].map((r) => r.name)).toEqual(
      [6, 5, 4, 3, 2, 1, 0].map((i) => `rig ${i}`),
    );
    expect(second.nextCursor).toBeNull();
    expect((await allRigs(databases.db)).map((r) => r.name)[0]).toBe('rig 0');
  });

  it('take their keys and settings with them', async () => {
    const rig = await newRig();
    const key = await createKey(databases.db, { rigId: rig.id, name: 'bench', by: nobody, nowMs: 2 });
    await addSettings(databases.db, { rigId: rig.id, settings, reason: 'first', by: nobody, nowMs: 2 });
    expect(await deleteRig(databases.db, rig.id)).toBe(true);
    expect(await deleteRig(databases.db, rig.id)).toBe(false);
    expect(await findKey(databases.db, key.id)).toBeNull();
    expect(await newestSettings(databases.db, rig.id)).toBeNull();
  });
});

describe('keys', () => {
  it('are revoked once, by their own rig only', async () => {
    const rig = await newRig();
    const other = await newRig('other');
    const key = await createKey(databases.db, { rigId: rig.id, name: 'bench', by: nobody, nowMs: 2 });
    expect(await revokeKey(databases.db, { rigId: other.id, keyId: key.id, nowMs: 3 })).toBe(false);
    expect((await findKey(databases.db, key.id))?.revokedAt).toBeNull();
    await touchKey(databases.db, key.id, 4);
    expect((await listKeys(databases.db, rig.id, firstPage)).items).toEqual([
      { ...key, lastUsedAt: '1970-01-01T00:00:00.004Z' },
    ]);
    expect(await revokeKey(databases.db, { rigId: rig.id, keyId: key.id, nowMs: 5 })).toBe(true);
    expect(await revokeKey(databases.db, { rigId: rig.id, keyId: key.id, nowMs: 6 })).toBe(false);
    expect((await findKey(databases.db, key.id))?.revokedAt).toBe('1970-01-01T00:00:00.005Z');
    expect((await listKeys(databases.db, rig.id, firstPage)).items).toEqual([]);
  });
});

describe('settings versions', () => {
  it('count up within their rig and stay', async () => {
    const rig = await newRig();
    const other = await newRig('other');
    const add = (rigId: string, holdoffS: number) =>
      addSettings(databases.db, {
        rigId,
        settings: { ...settings, holdoffS },
        reason: `hold ${holdoffS}`,
        by: nobody,
        nowMs: 9,
      });
    expect(await newestSettings(databases.db, rig.id)).toBeNull();
    const added = await Promise.all([1, 2, 3].map((s) => add(rig.id, s)));
    expect(added.map((s) => s.version)).toEqual([1, 2, 3]);
    expect((await add(other.id, 5)).version).toBe(1);
    expect(await newestSettings(databases.db, rig.id)).toEqual({
      ...settings,
      holdoffS: 3,
      version: 3,
      createdAt: '1970-01-01T00:00:00.009Z',
      createdBy: 'Test',
      reason: 'hold 3',
    });
    const page = await listSettings(databases.db, rig.id, { cursor: null, limit: 2 });
    expect(page.items.map((s) => s.version)).toEqual([3, 2]);
    const cursor = decodeCursor(page.nextCursor);
    const rest = await listSettings(databases.db, rig.id, {
      cursor: cursor.ok ? cursor.value : null,
      limit: 2,
    });
    expect(rest.items.map((s) => s.version)).toEqual([1]);
    expect(rest.nextCursor).toBeNull();
  });
});

describe('audit', () => {
  it('is listed newest first, of one subject or all', async () => {
    for (let i = 0; i < 5; i++) {
      await writeAudit(databases.db, {
        by: nobody,
        action: 'rig.changed',
        subject: `rig-${i % 2}`,
        detail: { i },
        nowMs: i,
      });
    }
    const page = await listAudit(databases.db, { cursor: null, limit: 2, subject: 'rig-0' });
    expect(page.items.map((e) => e.detail)).toEqual([{ i: 4 }, { i: 2 }]);
    const cursor = decodeCursor(page.nextCursor);
    const rest = await listAudit(databases.db, {
      cursor: cursor.ok ? cursor.value : null,
      limit: 2,
      subject: 'rig-0',
    });
    expect(rest.items.map((e) => e.detail)).toEqual([{ i: 0 }]);
    expect((await listAudit(databases.db, firstPage)).items.length).toBe(5);
  });
});

describe('small things', () => {
  it('hub values are replaced', async () => {
    expect(await getHubValue(databases.db, 'k')).toBeNull();
    await setHubValue(databases.db, 'k', '1');
    await setHubValue(databases.db, 'k', '2');
    expect(await getHubValue(databases.db, 'k')).toBe('2');
  });

  it('a response stands for its key until it is replaced, forgotten or expired', async () => {
    const { id: rigId } = await newRig();
    const remember = (response: unknown, expiresAtMs: number) =>
      replaceResponse(databases.db, { rigId, key: 'k', response, expiresAtMs });
    const recall = (nowMs: number) => recallResponse(databases.db, { rigId, key: 'k', nowMs });
    expect(await recall(0)).toBeNull();
    await remember({ n: 1 }, 50);
    await remember({ n: 2 }, 100);
    expect(await recall(99)).toEqual({ n: 2 });
    expect(await recall(100)).toBeNull();
    expect(await pruneResponses(databases.db, 99)).toBe(0);
    expect(await pruneResponses(databases.db, 100)).toBe(1);
    await remember({ n: 3 }, 200);
    await forgetResponse(databases.db, rigId, 'other');
    expect(await recall(199)).toEqual({ n: 3 });
    await forgetResponse(databases.db, rigId, 'k');
    expect(await recall(199)).toBeNull();
  });
});
