import { z } from 'zod';
import type { RigSetup } from '@/signal/model';
import { finite, id, instant, listOf, positive } from '@/server/contract/common';

export const sensor = z.object({
  kind: z.enum(['linear', 'switch', 'latch', 'omnipolar']).default('linear'),
  supplyV: positive.nullable().default(null),
  quiescentV: finite.nullable().default(null),
  sensitivityMvPerMt: positive.nullable().default(null),
  activeLow: z.boolean().default(false),
  operateMt: finite.nullable().default(null),
  releaseMt: finite.nullable().default(null),
});

export const channel = z.object({
  name: z
    .string()
    .min(1)
    .max(16)
    .regex(/^[A-Za-z0-9_.:-]+$/, 'letters, digits and _ . : - only'),
  role: z.enum(['A', 'B', 'Z', 'U', 'V', 'W', 'aux']),
  voltsPerCode: finite.refine((n) => n !== 0, 'must not be 0').default(1),
  codeOffset: finite.default(0),
  minCode: z.number().int().nullable().default(null),
  maxCode: z.number().int().nullable().default(null),
  maxInputV: positive.nullable().default(null),
  sensor: sensor.prefault({}),
});

export const wheel = z.object({
  pulsesPerTurn: z.number().int().min(1).max(100_000),
  missingPulses: z.number().int().min(0).max(1000).default(0),
  gearRatio: positive.default(1),
  widthClasses: z
    .array(z.object({ widthS: positive, means: z.enum(['forward', 'reverse', 'weak']) }))
    .min(1)
    .nullable()
    .default(null),
});

const rigFields = z.object({
  name: z.string().trim().min(1).max(80),
  sensing: z.enum(['single', 'quadrature', 'three-hall', 'width-coded']),
  wheel,
  channels: z.array(channel).min(1).max(8),
  expectedDirection: z.enum(['forward', 'reverse']).nullable().default(null),
  ratedRpm: positive.nullable().default(null),
});

/** Roles that an arrangement cannot do without. */
export const neededRoles = {
  single: ['A'],
  quadrature: ['A', 'B'],
  'three-hall': ['U', 'V', 'W'],
  'width-coded': ['A'],
} as const;

function checkRig(rig: z.infer<typeof rigFields>, report: z.RefinementCtx) {
  const names = rig.channels.map((c) => c.name);
  names.forEach((name, i) => {
    if (names.indexOf(name) !== i) {
      report.addIssue({ code: 'custom', path: ['channels', i, 'name'], message: `"${name}" is used twice` });
    }
  });
  for (const wanted of neededRoles[rig.sensing]) {
    const holders = rig.channels.filter((c) => c.role === wanted).length;
    if (holders !== 1) {
      report.addIssue({
        code: 'custom',
        path: ['channels'],
        message: `${rig.sensing} sensing needs exactly one channel with role ${wanted}, found ${holders}`,
      });
    }
  }
  if (rig.wheel.missingPulses >= rig.wheel.pulsesPerTurn) {
    report.addIssue({
      code: 'custom',
      path: ['wheel', 'missingPulses'],
      message: 'must be fewer than the positions of the wheel',
    });
  }
  if (rig.sensing === 'width-coded' && rig.wheel.widthClasses === null) {
    report.addIssue({
      code: 'custom',
      path: ['wheel', 'widthClasses'],
      message: 'width-coded sensing needs widths',
    });
  }
  rig.channels.forEach((c, i) => {
    if (c.minCode !== null && c.maxCode !== null && c.minCode >= c.maxCode) {
      report.addIssue({ code: 'custom', path: ['channels', i, 'maxCode'], message: 'must be above minCode' });
    }
  });
}

/** `POST /rigs`. A PATCH is merged with the stored rig and checked as a whole. */
export const rigInput = rigFields.superRefine(checkRig).meta({ id: 'RigInput' });
/** Every member may be left out; those given replace the stored ones whole. No defaults are filled in. */
export const rigPatch = z
  .object({
    name: rigFields.shape.name,
    sensing: rigFields.shape.sensing,
    wheel,
    channels: rigFields.shape.channels,
    expectedDirection: z.enum(['forward', 'reverse']).nullable(),
    ratedRpm: positive.nullable(),
  })
  .partial()
  .meta({ id: 'RigPatch' });
export const rig = z.object({ id, ...rigFields.shape, createdAt: instant }).meta({ id: 'Rig' });
export const rigList = listOf(rig);

export type RigInput = z.input<typeof rigInput>;
export type RigFields = z.output<typeof rigFields>;
export type Rig = z.output<typeof rig>;

// The contract and the signal path must mean the same rig.
type Same<A extends B, B extends C, C = A> = [A, B, C];
export type RigMatchesSignal = Same<Omit<RigFields, 'name'>, RigSetup>;

export const rigKeyInput = z.object({ name: z.string().trim().min(1).max(80) }).meta({ id: 'RigKeyInput' });
export const rigKey = z
  .object({ id, name: z.string(), createdAt: instant, createdBy: z.string(), lastUsedAt: instant.nullable() })
  .meta({ id: 'RigKey' });
export const rigKeyCreated = z
  .object({ id, name: z.string(), createdAt: instant, key: z.string() })
  .meta({ id: 'RigKeyCreated' });
export const rigKeyList = listOf(rigKey);
export type RigKey = z.infer<typeof rigKey>;
export type RigKeyCreated = z.infer<typeof rigKeyCreated>;
