/** A rig with its settings, as the hub runs it. */
import { allRigs, getRig, newestSettings } from '@/db';
import type { RigRecord, SettingsRecord, TurnmarkDb } from '@/db';
import type { Hub, HubRig } from '@/server/hub/hub-types';
import type { RigSetup, Settings } from '@/signal/model';
import { defaultSettings } from '@/signal/model';

export function setupOf({ sensing, wheel, channels, expectedDirection, ratedRpm }: RigSetup): RigSetup {
  return { sensing, wheel, channels, expectedDirection, ratedRpm };
}

export function signalSettingsOf({ filter, band, holdoffS, speed }: Settings): Settings {
  return { filter, band, holdoffS, speed };
}

/** Version 0, in force until a rig's first settings. */
export function firstSettings(rig: Pick<RigRecord, 'createdAt'>): SettingsRecord {
  return {
    version: 0,
    createdAt: rig.createdAt,
    createdBy: 'Turnmark',
    reason: 'In force until the first settings are saved',
    ...defaultSettings,
  };
}

export async function settingsInForce(db: TurnmarkDb, rig: RigRecord): Promise<SettingsRecord> {
  return (await newestSettings(db, rig.id)) ?? firstSettings(rig);
}

function hubRigOf(rig: RigRecord, settings: SettingsRecord): HubRig {
  return {
    id: rig.id,
    setup: setupOf(rig),
    settings: signalSettingsOf(settings),
    settingsVersion: settings.version,
  };
}

/**
 * Tells the hub of a rig as it is stored now, not as one request saw it: changes that meet must not undo each other. The
 * rig is read last, so that one deleted meanwhile stays away.
 */
export async function tellHub(
  { db, hub }: { db: TurnmarkDb; hub: Pick<Hub, 'rigSaved'> },
  rig: RigRecord,
): Promise<void> {
  const settings = await settingsInForce(db, rig);
  const stored = await getRig(db, rig.id);
  if (stored !== null) hub.rigSaved(hubRigOf(stored, settings));
}

export async function allHubRigs(db: TurnmarkDb): Promise<HubRig[]> {
  const rigs = await allRigs(db);
  return Promise.all(rigs.map(async (rig) => hubRigOf(rig, await settingsInForce(db, rig))));
}
