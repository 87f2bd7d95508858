/** The whole capture goes out as a file. */
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { z } from 'zod';
import { getCapture } from '@/db';
import type { CaptureStore, TurnmarkDb } from '@/db';
import { actorOf } from '@/server/audit';
import type { Audit } from '@/server/audit';
import { exportFile, exportTypes } from '@/server/captures/export';
import { exportQuery } from '@/server/contract';
import { ApiProblem } from '@/server/http/problems';
import type { Route } from '@/server/http/route';
import { route } from '@/server/http/route';
import { captureParams, found } from './shared';

export type CaptureExportDeps = { db: TurnmarkDb; store: CaptureStore; audit: Audit };

export function captureExportRoutes({ db, store, audit }: CaptureExportDeps): Route[] {
  return [
    route({
      method: 'get',
      path: '/captures/:captureId/export',
      access: 'reviewer',
      tag: 'Captures',
      summary: 'The whole capture as a file',
      description:
        'CBOR and JSON (a batch a line) can be streamed to a rig again; WAV is refused where it cannot hold it.',
      params: captureParams,
      query: exportQuery,
      answers: [
        {
          status: 200,
          description: 'The file',
          schema: z.string(),
          contentTypes: Object.values(exportTypes),
        },
      ],
      problems: ['not-found', 'cannot-export'],
      async handle({ params: { captureId }, query: { format }, user, res }) {
        const stored = found(await getCapture(db, captureId), 'capture');
        const file = await exportFile(store, stored, format);
        if (!file.ok) throw new ApiProblem('cannot-export', { detail: file.issue });
        const { contentType, extension, parts } = file.value;
        await audit.captureExported(actorOf(user), captureId, format);
        res.status(200).set({
          'Content-Type': contentType,
          'Content-Disposition': `attachment; filename="turnmark-${captureId}.${extension}"`,
        });
        await pipeline(Readable.from(parts), res);
        return undefined;
      },
    }),
  ];
}
