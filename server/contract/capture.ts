import { z } from 'zod';
import { findingCodes } from '@/signal/model';
import { direction, finding, margin, wheelFace } from '@/server/contract/findings';
import { finite, id, instant, listOf, positive } from '@/server/contract/common';
import { rig, wheel } from '@/server/contract/rig';
import { settings, signalSettings } from '@/server/contract/settings';
import { captureStatistics } from '@/server/contract/statistics';

const tag = z.string().trim().min(1).max(40);
const words = {
  title: z.string().trim().max(120),
  tags: z.array(tag).max(20),
  note: z.string().max(10_000),
};

/** `POST /rigs/:rigId/captures`: the last seconds, or a stretch of one stream. */
export const captureInput = z
  .union([
    z.object({
      lastSeconds: positive.max(3600),
      title: words.title.optional(),
      tags: words.tags.default([]),
      note: words.note.default(''),
    }),
    z
      .object({
        stream: z.string().min(1).max(64),
        fromS: finite.min(0),
        toS: finite,
        title: words.title.optional(),
        tags: words.tags.default([]),
        note: words.note.default(''),
      })
      .refine((c) => c.toS > c.fromS, { path: ['toS'], message: 'must be after fromS' }),
  ])
  .meta({ id: 'CaptureInput' });
export type CaptureInput = z.input<typeof captureInput>;

export const capturePatch = z
  .object({ title: words.title.min(1), tags: words.tags, note: words.note })
  .partial()
  .meta({ id: 'CapturePatch' });
export type CapturePatch = z.input<typeof capturePatch>;

export const capture = z
  .object({
    id,
    rigId: id,
    title: z.string(),
    tags: z.array(z.string()),
    note: z.string(),
    stream: z.string(),
    startedAt: instant,
    durationS: z.number(),
    rateHz: z.number(),
    createdAt: instant,
    createdBy: z.string(),
    settings,
    rig,
    /** Channels kept, in the order of the rig. */
    channels: z.array(z.string()),
    /** Worst findings of the kept settings, for lists; newest analysis. */
    findings: z.array(
      z.object({
        code: z.enum(findingCodes),
        severity: z.enum(['note', 'warn', 'fault']),
        count: z.number().int(),
      }),
    ),
  })
  .meta({ id: 'Capture' });
export const captureList = listOf(capture);
export type Capture = z.output<typeof capture>;

export const captureQuery = z.object({
  rig: id.optional(),
  tag: z.string().optional(),
  finding: z.enum(findingCodes).optional(),
  q: z.string().max(200).optional(),
  cursor: z.string().max(200).optional(),
  limit: z.coerce.number().int().min(1).max(100).default(50),
});

export const samplesQuery = z.object({
  channel: z.string().min(1),
  fromS: z.coerce.number().min(0).default(0),
  toS: z.coerce.number().optional(),
  points: z.coerce.number().int().min(1).max(20_000).default(1000),
  /** `zero-phase`: the filter run forward and backward, without any delay. */
  signal: z.enum(['raw', 'filtered', 'zero-phase']).default('raw'),
});

const volts = z.array(z.number().nullable());
export const samples = z
  .object({
    channel: z.string(),
    rateHz: z.number(),
    fromS: z.number(),
    stepS: z.number(),
    kind: z.enum(['raw', 'minmax']),
    v: volts.optional(),
    min: volts.optional(),
    max: volts.optional(),
  })
  .meta({ id: 'Samples' });
export type Samples = z.infer<typeof samples>;

export const analysisInput = z
  .object({
    settings: signalSettings,
    wheel: wheel.optional(),
    /** Run the filter forward and backward: no delay, its gain squared. */
    zeroPhase: z.boolean().default(false),
  })
  .meta({ id: 'AnalysisInput' });

export const analysis = z
  .object({
    channels: z.record(
      z.string(),
      z.object({
        lowV: z.number().nullable(),
        highV: z.number().nullable(),
        operateV: z.number().nullable(),
        releaseV: z.number().nullable(),
        band: z.array(z.object({ t: z.number(), operateV: z.number(), releaseV: z.number() })),
        edges: z.array(
          z.object({ t: z.number(), midT: z.number(), rising: z.boolean(), late: z.boolean().optional() }),
        ),
      }),
    ),
    speed: z.array(z.object({ t: z.number(), rpm: z.number().nullable(), errorRpm: z.number().nullable() })),
    direction: z.array(z.object({ from: z.number(), to: z.number(), value: direction })),
    turns: z.number(),
    positions: z.number(),
    pulses: z.number(),
    gaps: z.array(
      z.object({ from: z.number(), to: z.number(), lostSamples: z.number(), estimated: z.boolean() }),
    ),
    delayS: z.number(),
    margin: margin.nullable(),
    wheelFace: wheelFace.nullable(),
    statistics: captureStatistics.nullable(),
    findings: z.array(finding),
  })
  .meta({ id: 'Analysis' });

export const exportQuery = z.object({ format: z.enum(['csv', 'json', 'cbor', 'wav']) });
