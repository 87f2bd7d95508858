/** Captures: kept, found, named, deleted. */
import { deleteCapture, getCapture, getRig, listCaptures, updateCapture } from '@/db';
import type { CaptureStore, Spool, TurnmarkDb } from '@/db';
import { actorOf } from '@/server/audit';
import type { Audit } from '@/server/audit';
import type { CaptureAnalyses } from '@/server/captures/analyses';
import { captureOf } from '@/server/captures/capture-shape';
import { keepStretch } from '@/server/captures/keep';
import type { Clock } from '@/server/clock';
import { capture, captureInput, captureList, capturePatch, captureQuery } from '@/server/contract';
import type { Hub } from '@/server/hub/hub-types';
import { ApiProblem } from '@/server/http/problems';
import type { Route } from '@/server/http/route';
import { route } from '@/server/http/route';
import { captureParams, found, pageOf, rigParams } from './shared';

export type CaptureRoutesDeps = {
  db: TurnmarkDb;
  spool: Spool;
  store: CaptureStore;
  hub: Hub;
  analyses: CaptureAnalyses;
  audit: Audit;
  clock: Clock;
};

const tag = 'Captures';

export function captureRoutes(deps: CaptureRoutesDeps): Route[] {
  const { db, analyses, audit } = deps;
  return [
    route({
      method: 'post',
      path: '/rigs/:rigId/captures',
      access: 'engineer',
      tag,
      summary: 'Keep the last seconds, or a stretch of a stream',
      description:
        '`lastSeconds` counts back from the newest stored sample; with less there, the capture is shorter and says so.',
      params: rigParams,
      body: captureInput,
      answers: [{ status: 201, description: 'The capture', schema: capture }],
      problems: ['not-found', 'nothing-to-keep', 'unavailable'],
      async handle({ params: { rigId }, body, user }) {
        const rig = found(await getRig(db, rigId), 'rig');
        const kept = await keepStretch(deps, rig, body, actorOf(user));
        if (kept === null) {
          throw new ApiProblem('nothing-to-keep', {
            detail: 'Nothing of this is stored: no block came, or it is too old.',
          });
        }
        await audit.captureKept(actorOf(user), kept.id, rigId);
        const summed = await analyses.summarize(kept);
        return { status: 201, body: captureOf(summed), headers: { Location: `/api/v1/captures/${kept.id}` } };
      },
    }),
    route({
      method: 'get',
      path: '/captures',
      access: 'reviewer',
      tag,
      summary: 'The Shelf: captures, newest first',
      query: captureQuery,
      answers: [{ status: 200, description: 'Captures', schema: captureList }],
      problems: [],
      async handle({ query: { rig: rigId, tag: wanted, finding, q, ...page } }) {
        const { items, nextCursor } = await listCaptures(db, {
          ...pageOf(page),
          rigId,
          tag: wanted,
          finding,
          q,
        });
        return { status: 200, body: { items: items.map(captureOf), nextCursor } };
      },
    }),
    route({
      method: 'get',
      path: '/captures/:captureId',
      access: 'reviewer',
      tag,
      summary: 'One capture',
      params: captureParams,
      answers: [{ status: 200, description: 'The capture', schema: capture }],
      problems: ['not-found'],
      handle: async ({ params }) => ({
        status: 200,
        body: captureOf(found(await getCapture(db, params.captureId), 'capture')),
      }),
    }),
    route({
      method: 'patch',
      path: '/captures/:captureId',
      access: 'engineer',
      tag,
      summary: 'Change title, tags or note',
      params: captureParams,
      body: capturePatch,
      answers: [{ status: 200, description: 'The capture as it is now', schema: capture }],
      problems: ['not-found'],
      async handle({ params: { captureId }, body, user }) {
        const saved = found(await updateCapture(db, captureId, body), 'capture');
        await audit.captureChanged(actorOf(user), captureId, Object.keys(body));
        return { status: 200, body: captureOf(saved) };
      },
    }),
    route({
      method: 'delete',
      path: '/captures/:captureId',
      access: 'engineer',
      tag,
      summary: 'Delete a capture: an engineer one of their own, an admin any',
      params: captureParams,
      answers: [{ status: 204, description: 'Gone' }],
      problems: ['not-found'],
      async handle({ params: { captureId }, user, req }) {
        const stored = found(await getCapture(db, captureId), 'capture');
        if (user.role !== 'admin' && stored.createdById !== user.id) {
          await audit.forbidden(actorOf(user), req.method, req.originalUrl, req.ip);
          throw new ApiProblem('forbidden', {
            detail: `Only ${stored.createdBy} or an admin may delete this capture.`,
          });
        }
        found((await deleteCapture(db, captureId)) || null, 'capture');
        analyses.forget(captureId);
        await audit.captureDeleted(actorOf(user), captureId, stored.title);
        return { status: 204 };
      },
    }),
  ];
}
