/**
 * The live socket, `GET /live/v1`. Messages are JSON texts. The viewer says `hello` first (within 5 s), then
 * `watch` whenever what it looks at changes; the hub answers with frames, each of which replaces the one before.
 */
import { z } from 'zod';
import { id, instant } from '@/server/contract/common';
import { direction, finding, margin, wheelFace } from '@/server/contract/findings';

/** `GET /rigs/:rigId/live` */
export const live = z
  .object({
    state: z.enum(['waiting', 'running', 'stopped', 'unknown', 'silent']),
    stream: z.string().nullable(),
    streamS: z.number().nullable(),
    speedRpm: z.number().nullable(),
    speedErrorRpm: z.number().nullable(),
    speedAtMostRpm: z.number().nullable(),
    direction,
    turns: z.number().nullable(),
    turnsSince: instant.nullable(),
    rates: z.object({
      declaredHz: z.number().nullable(),
      arrivingHz: z.number().nullable(),
      toothHz: z.number().nullable(),
    }),
    margin: margin.nullable(),
    findings: z.array(finding),
    lookbackS: z.number(),
    lastBlockAt: instant.nullable(),
    /** How long no edge has come, s of stream time. */
    sinceLastEdgeS: z.number().nullable(),
    pulses: z.number().nullable(),
    positions: z.number().nullable(),
    /** In sync with a missing-tooth wheel. */
    synced: z.boolean().nullable(),
    settingsVersion: z.number().int(),
    phaseDeg: z.number().nullable(),
    delayS: z.number().nullable(),
    channels: z.array(
      z.object({
        channel: z.string(),
        lowV: z.number().nullable(),
        highV: z.number().nullable(),
        operateV: z.number().nullable(),
        releaseV: z.number().nullable(),
        noiseV: z.number().nullable(),
        duty: z.number().nullable(),
        edges: z.number(),
      }),
    ),
    /** What stands behind the speed; null before any block. */
    shaft: z
      .object({
        accelerationRpmPerS: z.number().nullable(),
        accelerationErrorRpmPerS: z.number().nullable(),
        limits: z.object({
          resolutionRpm: z.number().nullable(),
          delayS: z.number().nullable(),
          floorRpm: z.number().nullable(),
        }),
        pitch: z.object({
          state: z.enum(['none', 'learning', 'in-use']),
          turns: z.number().int(),
          turnsNeeded: z.number().int(),
          uneven: z.number().nullable(),
        }),
        sync: z
          .object({
            state: z.enum(['unsynced', 'proving', 'synced']),
            lostBecause: z
              .enum([
                'early-gap',
                'late-gap',
                'extra-tooth',
                'timeout',
                'stopped',
                'reversed',
                'lost-samples',
              ])
              .nullable(),
            gapRatio: z.number().nullable(),
          })
          .nullable(),
        index: z
          .object({
            expectedCounts: z.number(),
            meanCounts: z.number().nullable(),
            exactTurns: z.number().int(),
            lostTurns: z.number().int(),
            extraTurns: z.number().int(),
          })
          .nullable(),
        falseSteps: z.object({ illegal: z.number().int(), invalidStates: z.number().int() }).nullable(),
      })
      .nullable(),
    /** Why the settings in force cannot be run at the stream's rate, else null. */
    setupProblem: z.string().nullable(),
  })
  .meta({ id: 'Live' });
export type Live = z.infer<typeof live>;

/** The signal of a stretch of stream time, made for drawing. Lanes in the rig's channel order. */
export const ribbon = z.object({
  fromS: z.number(),
  toS: z.number(),
  /** What stands at the right edge. */
  anchor: z.enum(['edge', 'now']),
  /** What the lanes show: volts as they came, or what the band sees behind a filter that takes the level away. */
  signal: z.enum(['raw', 'filtered']),
  /**
   * Column i of every lane stands at `firstS + i * stepS` (the middle of its samples): real sample instants, so that
   * the first and last may lie just outside `fromS`..`toS`; clip the drawing to the window.
   */
  firstS: z.number(),
  stepS: z.number(),
  lanes: z.array(
    z.object({
      channel: z.string(),
      /** Volts, one pair a column, null inside gaps. Equal where a column holds one sample. */
      min: z.array(z.number().nullable()),
      max: z.array(z.number().nullable()),
      lowV: z.number().nullable(),
      highV: z.number().nullable(),
      operateV: z.number().nullable(),
      releaseV: z.number().nullable(),
      /** Volts where the input clips, or null. */
      clipLowV: z.number().nullable(),
      clipHighV: z.number().nullable(),
    }),
  ),
  /** Marks of the rail; where they would stand closer than a column, one for each kind and column. */
  edges: z.array(
    z.object({
      channel: z.string(),
      t: z.number(),
      rising: z.boolean(),
      direction: z.enum(['forward', 'reverse', 'unknown']),
    }),
  ),
  rejected: z.array(z.object({ channel: z.string(), t: z.number() })),
  /** All of them, also those that are not in the lists above. */
  edgeCounts: z.array(z.object({ channel: z.string(), edges: z.number(), rejected: z.number() })),
  gaps: z.array(
    z.object({ from: z.number(), to: z.number(), lostSamples: z.number(), estimated: z.boolean() }),
  ),
});
export type Ribbon = z.infer<typeof ribbon>;

/** Speed of the last 60 s, oldest first; at most once a second. `agoS` counts back from the frame. */
export const speedHistory = z.object({ agoS: z.array(z.number()), rpm: z.array(z.number().nullable()) });

export const ribbonWish = z.object({
  /** 4 to 8 teeth by default; `spanS` wins where given. */
  teeth: z.number().min(1).max(200).optional(),
  spanS: z.number().min(0.0005).max(60).optional(),
  columns: z.number().int().min(16).max(2000),
  /** Stream time to stand around, instead of following the newest edge; the hub holds some twenty seconds. */
  atS: z.number().optional(),
  anchor: z.enum(['edge', 'now']).default('edge'),
});
export type RibbonWish = z.input<typeof ribbonWish>;

export const viewerMessage = z.discriminatedUnion('type', [
  z.object({ type: z.literal('hello'), accessToken: z.string().min(1).max(4096) }),
  z.object({
    type: z.literal('watch'),
    rigs: z
      .array(
        z.object({
          rigId: id,
          ribbon: ribbonWish.nullable().default(null),
          /** Wheel face and speed history are sent too. */
          detail: z.boolean().default(false),
        }),
      )
      .max(100),
  }),
]);
export type ViewerMessage = z.input<typeof viewerMessage>;

export const liveFrame = z.object({
  type: z.literal('frame'),
  rigId: id,
  /** The hub's clock when it made the frame. */
  at: instant,
  live,
  ribbon: ribbon.nullable(),
  wheelFace: wheelFace.nullable().optional(),
  speedHistory: speedHistory.optional(),
  /** Frames of this rig that this viewer did not get because it lagged. */
  dropped: z.number().int(),
});
export type LiveFrame = z.infer<typeof liveFrame>;

export const hubMessage = z.discriminatedUnion('type', [
  z.object({ type: z.literal('welcome'), expiresInS: z.number() }),
  liveFrame,
  z.object({ type: z.literal('gone'), rigId: id }),
  z.object({ type: z.literal('problem'), problem: z.looseObject({ type: z.string(), title: z.string() }) }),
]);
export type HubMessage = z.infer<typeof hubMessage>;

/** Close codes of the live socket (private range of RFC 6455). */
export const liveClose = { notSignedIn: 4401, forbidden: 4403, idle: 4408 } as const;
