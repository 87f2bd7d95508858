import { z } from 'zod';
import { findingCodes } from '@/signal/model';

export const finding = z
  .object({
    code: z.enum(findingCodes),
    channel: z.string().nullable(),
    from: z.number(),
    to: z.number().nullable(),
    severity: z.enum(['note', 'warn', 'fault']),
    outcome: z.enum(['found', 'cannot-tell']),
    at: z.number(),
    evidence: z.record(z.string(), z.union([z.number(), z.string()])),
    message: z.string(),
    remedy: z.string(),
    causedBy: z.enum(findingCodes).nullable(),
  })
  .meta({ id: 'Finding' });

export const margin = z
  .object({
    channel: z.string(),
    volts: z.number(),
    sigmas: z.number().nullable(),
    millitesla: z.number().nullable(),
  })
  .meta({ id: 'Margin' });

export const direction = z.enum(['forward', 'reverse', 'stopped', 'unknown']);

export const wheelFace = z.object({
  numbered: z.boolean(),
  positions: z.array(
    z.object({
      angleDeg: z.number(),
      spacingErrorDeg: z.number().nullable(),
      swingV: z.number().nullable(),
      missing: z.boolean(),
      count: z.number(),
    }),
  ),
  angleDeg: z.number().nullable(),
});
