import { z } from 'zod';

const spread = z.object({ mean: z.number(), least: z.number(), most: z.number(), rms: z.number() });
const lines = z.array(z.object({ order: z.number().int(), amplitude: z.number(), phaseDeg: z.number() }));

/** What a whole capture says about its signal; parts that it cannot tell are null. */
export const captureStatistics = z
  .object({
    from: z.number(),
    to: z.number(),
    channels: z.record(
      z.string(),
      z.object({
        levels: z.object({ lowV: z.number(), highV: z.number(), resolutionV: z.number() }).nullable(),
        sine: z.object({ amplitudeV: z.number(), offsetV: z.number(), residualRmsV: z.number() }).nullable(),
        dutyFactor: spread.nullable(),
        riseS: spread.nullable(),
        fallS: spread.nullable(),
        overshootPct: z.number().nullable(),
        extraMidCrossings: z.number().nullable(),
      }),
    ),
    jitter: z
      .object({
        teeth: z.number().int(),
        periodRmsS: z.number(),
        periodPeakToPeakS: z.number(),
        cycleToCycleRmsS: z.number(),
        cycleToCycleMostS: z.number(),
        timeIntervalErrorRmsS: z.number(),
        timeIntervalErrorToothDeg: z.number(),
        withoutPattern: z.boolean(),
      })
      .nullable(),
    turns: z.array(z.object({ t: z.number(), rpm: z.number() })),
    speedOrders: z.object({ turns: z.number().int(), meanRpm: z.number(), lines }).nullable(),
    swingOrders: z.object({ meanV: z.number(), lines }).nullable(),
    pair: z
      .object({
        gainRatio: z.number(),
        phaseDeg: z.number(),
        phaseErrorDeg: z.number(),
        standardErrorDeg: z.number(),
      })
      .nullable(),
  })
  .meta({ id: 'CaptureStatistics' });
