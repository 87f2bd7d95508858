/** Rigs: wheel, channels and sensors as the bench has them. */
import { createRig, deleteRig, getRig, listRigs, updateRig } from '@/db';
import type { TurnmarkDb } from '@/db';
import { actorOf } from '@/server/audit';
import type { Audit } from '@/server/audit';
import type { RigKeys } from '@/server/auth/rig-keys';
import type { Clock } from '@/server/clock';
import { live, rig, rigInput, rigList, rigPatch } from '@/server/contract';
import type { Hub } from '@/server/hub/hub-types';
import { invalid, invalidField } from '@/server/http/problems';
import type { Route } from '@/server/http/route';
import { route } from '@/server/http/route';
import { firstSettings, settingsInForce, setupOf, signalSettingsOf, tellHub } from '@/server/rigs';
import type { RigSetup, Settings } from '@/signal/model';
import { validateSetup } from '@/signal/validate-setup';
import { found, pageOf, pageQuery, rigParams } from './shared';

export type RigRoutesDeps = { db: TurnmarkDb; hub: Hub; keys: RigKeys; audit: Audit; clock: Clock };

const tag = 'Rigs';

/** What the signal path itself would refuse; the rate is not known before a board has told it. */
function refuseUnrunnable(setup: RigSetup, settings: Settings): void {
  const issue = validateSetup(setup, settings, null, null);
  if (issue !== null) throw invalidField(issue.pointer, issue.detail);
}

export function rigRoutes({ db, hub, keys, audit, clock }: RigRoutesDeps): Route[] {
  return [
    route({
      method: 'get',
      path: '/rigs',
      access: 'reviewer',
      tag,
      summary: 'All rigs, newest first',
      query: pageQuery,
      answers: [{ status: 200, description: 'Rigs', schema: rigList }],
      problems: [],
      handle: async ({ query }) => ({ status: 200, body: await listRigs(db, pageOf(query)) }),
    }),
    route({
      method: 'post',
      path: '/rigs',
      access: 'engineer',
      tag,
      summary: 'Add a rig',
      body: rigInput,
      answers: [{ status: 201, description: 'The rig', schema: rig }],
      problems: [],
      async handle({ body: { name, ...setup }, user }) {
        const nowMs = clock.nowMs();
        refuseUnrunnable(setup, firstSettings({ createdAt: '' }));
        const made = await createRig(db, { name, setup, nowMs });
        await tellHub({ db, hub }, made);
        await audit.rigAdded(actorOf(user), made.id, made.name);
        return { status: 201, body: made, headers: { Location: `/api/v1/rigs/${made.id}` } };
      },
    }),
    route({
      method: 'get',
      path: '/rigs/:rigId',
      access: 'reviewer',
      tag,
      summary: 'One rig',
      params: rigParams,
      answers: [{ status: 200, description: 'The rig', schema: rig }],
      problems: ['not-found'],
      handle: async ({ params }) => ({ status: 200, body: found(await getRig(db, params.rigId), 'rig') }),
    }),
    route({
      method: 'patch',
      path: '/rigs/:rigId',
      access: 'engineer',
      tag,
      summary: 'Change a rig',
      description: 'Members given replace the stored ones whole; the result is checked as a whole.',
      params: rigParams,
      body: rigPatch,
      answers: [{ status: 200, description: 'The rig as it is now', schema: rig }],
      problems: ['not-found'],
      async handle({ params, body, user }) {
        const stored = found(await getRig(db, params.rigId), 'rig');
        const merged = rigInput.safeParse({ name: stored.name, ...setupOf(stored), ...body });
        if (!merged.success) throw invalid(merged.error);
        const { name, ...setup } = merged.data;
        const settings = await settingsInForce(db, stored);
        refuseUnrunnable(setup, signalSettingsOf(settings));
        const saved = found(await updateRig(db, params.rigId, { name, setup }), 'rig');
        // A new name alone must not start the counts anew.
        if (Object.keys(body).some((member) => member !== 'name')) await tellHub({ db, hub }, saved);
        await audit.rigChanged(actorOf(user), saved.id, Object.keys(body));
        return { status: 200, body: saved };
      },
    }),
    route({
      method: 'delete',
      path: '/rigs/:rigId',
      access: 'admin',
      tag,
      summary: 'Delete a rig with its keys and settings; its captures stay',
      params: rigParams,
      answers: [{ status: 204, description: 'Gone' }],
      problems: ['not-found'],
      async handle({ params: { rigId }, user }) {
        const stored = found(await getRig(db, rigId), 'rig');
        found((await deleteRig(db, rigId)) || null, 'rig');
        for (const keyId of keys.revokeRig(rigId)) hub.keyRevoked(keyId);
        hub.rigDeleted(rigId);
        await audit.rigDeleted(actorOf(user), rigId, stored.name);
        return { status: 204 };
      },
    }),
    route({
      method: 'get',
      path: '/rigs/:rigId/live',
      access: 'reviewer',
      tag,
      summary: 'How the rig is now',
      params: rigParams,
      answers: [{ status: 200, description: 'State, speed, direction, findings', schema: live }],
      problems: ['not-found'],
      handle: ({ params }) => ({ status: 200, body: found(hub.live(params.rigId), 'rig') }),
    }),
  ];
}
