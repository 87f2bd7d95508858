import { afterEach, beforeEach, expect, it } from 'vitest';
import { addSettings, createRig, deleteRig, openDatabases, updateRig } from '@/db';
import type { Databases } from '@/db/open';
import { nobody, settings, setup } from '@/db/test-support/rig';
import type { HubRig } from '@/server/hub/hub-types';
import { tellHub } from '@/server/rigs';

let databases: Databases;
beforeEach(() => (databases = openDatabases({ dataDir: ':memory:', durability: 'normal' })));
afterEach(() => databases.close());

it('the hub is told of a rig as it is stored, whatever the request that changes it saw before', async () => {
  const { db } = databases;
  const told: HubRig[] = [];
  const hub = { rigSaved: (rig: HubRig) => void told.push(rig) };
  const seen = await createRig(db, { name: 'Bench fan', setup, nowMs: 1 });
  const [a] = setup.channels;
  await updateRig(db, seen.id, { name: seen.name, setup: { ...setup, channels: [a!] } });
  await addSettings(db, { rigId: seen.id, settings, reason: 'r', by: nobody, nowMs: 2 });
  await tellHub({ db, hub }, seen);
  expect(told).toMatchObject([{ id: seen.id, settingsVersion: 1, setup: { channels: [{ name: 'A' }] } }]);
  await deleteRig(db, seen.id);
  await tellHub({ db, hub }, seen);
  expect(told).toHaveLength(1);
});
