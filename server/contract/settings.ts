import { z } from 'zod';
import type { Settings } from '@/signal/model';
import { finite, instant, listOf, positive } from '@/server/contract/common';

const order = z.union([z.literal(2), z.literal(4), z.literal(6), z.literal(8)]);

export const filter = z.union([
  z.object({ kind: z.literal('none') }),
  z.object({
    kind: z.enum(['lowpass', 'highpass']),
    family: z.enum(['butterworth', 'bessel']),
    order,
    cutoffHz: positive,
  }),
  z
    .object({
      kind: z.enum(['bandpass', 'notch']),
      family: z.literal('butterworth'),
      order,
      lowHz: positive,
      highHz: positive,
    })
    .refine((f) => f.highHz > f.lowHz, { path: ['highHz'], message: 'must be above lowHz' }),
]);

const levels = { operateV: finite, releaseV: finite };
const above = (b: { operateV: number; releaseV: number }) => b.operateV > b.releaseV;
const aboveMessage = { path: ['operateV'], message: 'must be above releaseV' };

export const band = z.discriminatedUnion('mode', [
  z
    .object({
      mode: z.literal('fixed'),
      ...levels,
      channels: z.record(z.string(), z.object(levels).refine(above, aboveMessage)).optional(),
    })
    .refine(above, aboveMessage),
  z
    .object({
      mode: z.literal('fitted'),
      operateFraction: finite.min(0.02).max(0.98).default(0.6),
      releaseFraction: finite.min(0.02).max(0.98).default(0.4),
    })
    .refine((b) => b.operateFraction > b.releaseFraction, {
      path: ['operateFraction'],
      message: 'must be above releaseFraction',
    }),
]);

export const speed = z.object({
  method: z.enum(['tooth', 'turn', 'window']).default('turn'),
  windowS: positive.max(60).default(0.1),
  stoppedAfterS: positive.max(3600).default(2),
});

export const signalSettings = z.object({
  filter: z.union([filter, z.array(filter).min(1).max(4)]).default({ kind: 'none' }),
  band: band.default({ mode: 'fitted', operateFraction: 0.6, releaseFraction: 0.4 }),
  holdoffS: finite.min(0).max(10).default(0),
  speed: speed.prefault({}),
});
export type SettingsMatchSignal = z.output<typeof signalSettings> extends Settings ? true : never;
const matches: SettingsMatchSignal = true;
void matches;

/** `POST /rigs/:rigId/settings` */
export const settingsInput = signalSettings
  .extend({ reason: z.string().trim().min(1).max(500) })
  .meta({ id: 'SettingsInput' });
export const settings = signalSettings
  .extend({
    /** 0: the settings in force before a rig's first version. */
    version: z.number().int().min(0),
    createdAt: instant,
    createdBy: z.string(),
    reason: z.string(),
  })
  .meta({ id: 'Settings' });
export const settingsList = listOf(settings);
export type SettingsVersion = z.output<typeof settings>;
export type SettingsInput = z.input<typeof settingsInput>;
