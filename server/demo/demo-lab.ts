/** The demo's rigs: made once, given a fresh key at every start, and set streaming. */
import {
  addSettings,
  createKey,
  createRig,
  firstPage,
  getHubValue,
  getRig,
  listKeys,
  revokeKey,
  setHubValue,
} from '@/db';
import { hubItself } from '@/server/audit';
import type { AppContext } from '@/server/context';
import { tellHub } from '@/server/rigs';
import { demoCommand, describeDemoRigs, runDemoRigs } from './demo-process';
import type { DemoRig } from './demo-process';

const keyName = 'Demo rig (made at start)';

/** undefined: somebody deleted it, and it stays away. A renamed one is still known. */
async function rigFor({ db, clock, hub, audit }: AppContext, demo: DemoRig): Promise<string | undefined> {
  const remembered = `demo-rig ${demo.name}`;
  const knownId = await getHubValue(db, remembered);
  if (knownId !== null) return (await getRig(db, knownId))?.id;
  const nowMs = clock.nowMs();
  const { name, ...setup } = demo.rig;
  const { reason, ...settings } = demo.settings;
  const rig = await createRig(db, { name, setup, nowMs });
  await setHubValue(db, remembered, rig.id);
  await addSettings(db, { rigId: rig.id, settings, reason, by: hubItself, nowMs });
  await tellHub({ db, hub }, rig);
  await audit.rigAdded(hubItself, rig.id, rig.name);
  return rig.id;
}

/** The key of the last start is not known any more: it ends, and a new one takes its place. */
async function freshKey({ db, clock, hub, keys, audit }: AppContext, rigId: string): Promise<string> {
  const nowMs = clock.nowMs();
  const { items } = await listKeys(db, rigId, firstPage);
  for (const old of items.filter((key) => key.name === keyName)) {
    await revokeKey(db, { rigId, keyId: old.id, nowMs });
    keys.revoke(old.id);
    hub.keyRevoked(old.id);
  }
  const made = await createKey(db, { rigId, name: keyName, by: hubItself, nowMs });
  await audit.keyAdded(hubItself, rigId, made.id, keyName);
  return keys.issue({ keyId: made.id, rigId });
}

export async function startDemoLab(context: AppContext, baseUrl: string): Promise<{ stop(): Promise<void> }> {
  const command = demoCommand();
  const rigs: { name: string; key: string }[] = [];
  for (const demo of await describeDemoRigs(command)) {
    const rigId = await rigFor(context, demo);
    if (rigId !== undefined) rigs.push({ name: demo.name, key: await freshKey(context, rigId) });
  }
  return runDemoRigs(command, { baseUrl, rigs }, context.log);
}
