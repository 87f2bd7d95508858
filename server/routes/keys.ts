/** Rig keys: made, listed by name, revoked at once. The key itself is in one answer only. */
import { createKey, getRig, listKeys, revokeKey } from '@/db';
import type { TurnmarkDb } from '@/db';
import { actorOf } from '@/server/audit';
import type { Audit } from '@/server/audit';
import type { RigKeys } from '@/server/auth/rig-keys';
import type { Clock } from '@/server/clock';
import { rigKeyCreated, rigKeyInput, rigKeyList } from '@/server/contract';
import type { Hub } from '@/server/hub/hub-types';
import type { Route } from '@/server/http/route';
import { route } from '@/server/http/route';
import { found, keyParams, pageOf, pageQuery, rigParams } from './shared';

export type KeyRoutesDeps = { db: TurnmarkDb; hub: Hub; keys: RigKeys; audit: Audit; clock: Clock };

const tag = 'Rig keys';

export function keyRoutes({ db, hub, keys, audit, clock }: KeyRoutesDeps): Route[] {
  return [
    route({
      method: 'get',
      path: '/rigs/:rigId/keys',
      access: 'engineer',
      tag,
      summary: 'The keys of a rig that are good, newest first',
      params: rigParams,
      query: pageQuery,
      answers: [{ status: 200, description: 'Keys, without the keys themselves', schema: rigKeyList }],
      problems: ['not-found'],
      async handle({ params: { rigId }, query }) {
        found(await getRig(db, rigId), 'rig');
        const { items, nextCursor } = await listKeys(db, rigId, pageOf(query));
        const shown = items.map(({ id, name, createdAt, createdBy, lastUsedAt }) => ({
          id,
          name,
          createdAt,
          createdBy,
          lastUsedAt,
        }));
        return { status: 200, body: { items: shown, nextCursor } };
      },
    }),
    route({
      method: 'post',
      path: '/rigs/:rigId/keys',
      access: 'engineer',
      tag,
      summary: 'Make a key for a board',
      params: rigParams,
      body: rigKeyInput,
      answers: [{ status: 201, description: 'The key, shown this once', schema: rigKeyCreated }],
      problems: ['not-found'],
      async handle({ params: { rigId }, body, user }) {
        found(await getRig(db, rigId), 'rig');
        const by = actorOf(user);
        const { id, name, createdAt } = await createKey(db, {
          rigId,
          name: body.name,
          by,
          nowMs: clock.nowMs(),
        });
        const key = keys.issue({ keyId: id, rigId });
        await audit.keyAdded(by, rigId, id, name);
        return { status: 201, body: { id, name, createdAt, key } };
      },
    }),
    route({
      method: 'delete',
      path: '/rigs/:rigId/keys/:keyId',
      access: 'engineer',
      tag,
      summary: 'Revoke a key; open streams of it end at once',
      params: keyParams,
      answers: [{ status: 204, description: 'Revoked' }],
      problems: ['not-found'],
      async handle({ params: { rigId, keyId }, user }) {
        const revoked = await revokeKey(db, { rigId, keyId, nowMs: clock.nowMs() });
        found(revoked || null, 'key');
        keys.revoke(keyId);
        hub.keyRevoked(keyId);
        await audit.keyRevoked(actorOf(user), rigId, keyId);
        return { status: 204 };
      },
    }),
  ];
}
