/** Settings versions: filter, band, hold-off, speed method. The newest is in force, from the next block on. */
import { addSettings, getRig, listSettings } from '@/db';
import type { TurnmarkDb } from '@/db';
import { actorOf } from '@/server/audit';
import type { Audit } from '@/server/audit';
import type { Clock } from '@/server/clock';
import { settings, settingsInput, settingsList } from '@/server/contract';
import type { Hub } from '@/server/hub/hub-types';
import { invalidField } from '@/server/http/problems';
import type { Route } from '@/server/http/route';
import { route } from '@/server/http/route';
import { setupOf, tellHub } from '@/server/rigs';
import { validateSetup } from '@/signal/validate-setup';
import { found, pageOf, pageQuery, rigParams } from './shared';

export type SettingsRoutesDeps = { db: TurnmarkDb; hub: Hub; audit: Audit; clock: Clock };

const tag = 'Settings';

export function settingsRoutes({ db, hub, audit, clock }: SettingsRoutesDeps): Route[] {
  return [
    route({
      method: 'get',
      path: '/rigs/:rigId/settings',
      access: 'reviewer',
      tag,
      summary: 'Settings versions of a rig, newest first',
      params: rigParams,
      query: pageQuery,
      answers: [
        { status: 200, description: 'Versions; none: the defaults are in force', schema: settingsList },
      ],
      problems: ['not-found'],
      async handle({ params: { rigId }, query }) {
        found(await getRig(db, rigId), 'rig');
        return { status: 200, body: await listSettings(db, rigId, pageOf(query)) };
      },
    }),
    route({
      method: 'post',
      path: '/rigs/:rigId/settings',
      access: 'engineer',
      tag,
      summary: 'Save a settings version; it is in force from the next block on',
      params: rigParams,
      body: settingsInput,
      answers: [{ status: 201, description: 'The version', schema: settings }],
      problems: ['not-found'],
      async handle({ params: { rigId }, body: { reason, ...wanted }, user }) {
        const rig = found(await getRig(db, rigId), 'rig');
        const rateHz = hub.live(rigId)?.rates.declaredHz ?? null;
        const issue = validateSetup(setupOf(rig), wanted, rateHz, null);
        if (issue !== null) throw invalidField(issue.pointer, issue.detail);
        const by = actorOf(user);
        const saved = await addSettings(db, { rigId, settings: wanted, reason, by, nowMs: clock.nowMs() });
        await tellHub({ db, hub }, rig);
        await audit.settingsSaved(by, rigId, saved.version);
        return { status: 201, body: saved };
      },
    }),
  ];
}
