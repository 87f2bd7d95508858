/** A rig with its settings, as the hub runs it. */
import { allRigs, newestSettings } from '@/db';
import type { RigRecord, SettingsRecord, TurnmarkDb } from '@/db';
import type { HubRig } from '@/server/hub/hub-types';
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

export function hubRigOf(rig: RigRecord, settings: SettingsRecord): HubRig {
  return {
    id: rig.id,
    setup: setupOf(rig),
    settings: signalSettingsOf(settings),
    settingsVersion: settings.version,
  };
}

export async function allHubRigs(db: TurnmarkDb): Promise<HubRig[]> {
  const rigs = await allRigs(db);
  return Promise.all(rigs.map(async (rig) => hubRigOf(rig, await settingsInForce(db, rig))));
}
