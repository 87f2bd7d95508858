/** A recording comes in as a file and becomes a capture. */
import multer, { MulterError } from 'multer';
import type { Request, Response } from 'express';
import { z } from 'zod';
import { getRig } from '@/db';
import type { Actor, CaptureRecord, CaptureStore, RigRecord, TurnmarkDb } from '@/db';
import { actorOf } from '@/server/audit';
import type { Audit } from '@/server/audit';
import type { CaptureAnalyses } from '@/server/captures/analyses';
import { captureOf } from '@/server/captures/capture-shape';
import { readFile } from '@/server/captures/upload/read-file';
import { maxUploadBytes } from '@/server/captures/upload/upload';
import type { Upload } from '@/server/captures/upload/upload';
import type { Clock } from '@/server/clock';
import { capture, id } from '@/server/contract';
import { ApiProblem, invalid, invalidField } from '@/server/http/problems';
import type { Route } from '@/server/http/route';
import { route } from '@/server/http/route';
import { settingsInForce } from '@/server/rigs';

export type CaptureUploadDeps = {
  db: TurnmarkDb;
  store: CaptureStore;
  analyses: CaptureAnalyses;
  audit: Audit;
  clock: Clock;
};

const tag = 'Captures';

const uploadFields = z.object({
  rigId: id,
  title: z.string().trim().max(120).optional(),
  tags: z
    .preprocess(
      (value) => (value === undefined ? [] : [value].flat()),
      z.array(z.string().trim().min(1).max(40)).max(20),
    )
    .meta({ description: 'Repeat the field for several' }),
  codes: z.enum(['0', '1']).default('0').meta({ description: '1: a CSV file holds codes' }),
});
const uploadForm = z
  .object({
    ...uploadFields.omit({ tags: true }).shape,
    tags: z.array(z.string()).optional(),
    file: z
      .string()
      .meta({ format: 'binary', description: 'CSV, JSON, CBOR, WAV or SenML, at most 256 MiB' }),
  })
  .meta({ id: 'CaptureUpload' });

const receive = multer({
  storage: multer.memoryStorage(),
  limits: { fileSize: maxUploadBytes, files: 1, fields: 40, fieldSize: 16 * 1024, parts: 50 },
}).single('file');

function receiveForm(req: Request, res: Response): Promise<void> {
  return new Promise((resolve, reject) => {
    receive(req, res, (error: unknown) => {
      if (!error) resolve();
      else if (error instanceof MulterError && error.code === 'LIMIT_FILE_SIZE') {
        reject(new ApiProblem('too-large', { detail: 'A file has at most 256 MiB.' }));
      } else if (error instanceof MulterError)
        reject(invalidField(`/${error.field ?? 'file'}`, error.message));
      else reject(new ApiProblem('unreadable', { detail: 'The form cannot be read.' }));
    });
  });
}

/** In the order of the rig; what the rig does not have is named. */
function channelsFor(rig: RigRecord, upload: Upload): string[] {
  const known = rig.channels.map(({ name }) => name);
  const stranger = upload.channels.find((name) => !known.includes(name));
  if (stranger !== undefined) {
    throw invalidField('/file', `The rig has no channel "${stranger}"; it has ${known.join(', ')}.`);
  }
  return known.filter((name) => upload.channels.includes(name));
}

export function captureUploadRoutes({ db, store, analyses, audit, clock }: CaptureUploadDeps): Route[] {
  let receiving = false;

  async function keepUpload(
    rig: RigRecord,
    upload: Upload,
    words: { title: string; tags: string[] },
    by: Actor,
  ): Promise<CaptureRecord | null> {
    const nowMs = clock.nowMs();
    return store.keep({
      meta: {
        rigId: rig.id,
        ...words,
        note: '',
        stream: upload.stream,
        startedAtMs: upload.startedAtS === undefined ? nowMs : upload.startedAtS * 1000,
        rateHz: upload.rateHz,
        channels: channelsFor(rig, upload),
        by,
        nowMs,
        settings: await settingsInForce(db, rig),
        rig,
        findings: [],
      },
      source: upload.pieces(),
      gaps: upload.gaps,
      fromIndex: 0,
      toIndex: upload.lengthSamples,
    });
  }

  async function takeUpload(req: Request, res: Response, by: Actor): Promise<CaptureRecord> {
    await receiveForm(req, res);
    const fields = uploadFields.safeParse(req.body ?? {});
    if (!fields.success) throw invalid(fields.error);
    const { rigId, title, tags, codes } = fields.data;
    const { file } = req;
    if (file === undefined) throw invalidField('/file', 'A file is needed.');
    const rig = await getRig(db, rigId);
    if (rig === null) throw invalidField('/rigId', 'There is no such rig.');
    const rigChannels = rig.channels.map(({ name }) => name);
    const options = { codes: codes === '1', rigChannels, nowMs: clock.nowMs() };
    const read = await readFile({ name: file.originalname, bytes: file.buffer }, options);
    if (!read.ok) {
      const { slug, detail, at } = read.issue;
      const text = at === undefined ? detail : `${detail} (${at})`;
      if (slug === 'unreadable') throw new ApiProblem('unreadable', { detail: text });
      if (slug === 'too-large') throw new ApiProblem('too-large', { detail: text });
      throw invalidField('/file', text);
    }
    const name = title || file.originalname.replace(/\.[a-z0-9]+$/i, '').slice(0, 120) || rig.name;
    const kept = await keepUpload(rig, read.upload, { title: name, tags }, by);
    if (kept === null) throw invalidField('/file', 'The file holds no sample.');
    return kept;
  }

  return [
    route({
      method: 'post',
      path: '/captures',
      access: 'engineer',
      tag,
      summary: 'Upload a recording: it becomes a capture',
      description: 'Time starts at 0 with the first sample. Integer WAV holds codes, float WAV volts.',
      rawBody: { contentType: 'multipart/form-data', schema: uploadForm },
      answers: [{ status: 201, description: 'The capture', schema: capture }],
      problems: ['unreadable', 'invalid', 'too-large', 'content-type', 'unavailable'],
      async handle({ req, res, user }) {
        if (!req.is('multipart/form-data')) {
          throw new ApiProblem('content-type', { detail: 'Content-Type must be multipart/form-data.' });
        }
        if (receiving) {
          throw new ApiProblem('unavailable', {
            detail: 'Another recording is being uploaded. Try again a little later.',
            headers: { 'Retry-After': '5', Connection: 'close' },
          });
        }
        receiving = true;
        try {
          const by = actorOf(user);
          const kept = await takeUpload(req, res, by);
          await audit.captureKept(by, kept.id, kept.rigId);
          const summed = await analyses.summarize(kept);
          return {
            status: 201,
            body: captureOf(summed),
            headers: { Location: `/api/v1/captures/${kept.id}` },
          };
        } finally {
          receiving = false;
        }
      },
    }),
  ];
}
