/** What a whole capture says about its signal beyond edges and speed. Every part is null where the capture cannot tell it. */

export type SpreadOf = { mean: number; least: number; most: number; rms: number };

/** One channel, over a window of the capture in which the shaft turned. */
export type ChannelStatistics = {
  /** State levels by the histogram (mode), V. */
  levels: { lowV: number; highV: number; resolutionV: number } | null;
  /** The sine that fits best, in tooth phase; Null where the residual is over a quarter of the amplitude. */
  sine: { amplitudeV: number; offsetV: number; residualRmsV: number } | null;
  /** High share of the period, mid to mid. */
  dutyFactor: SpreadOf | null;
  /** 10 % to 90 % of the amplitude, s. Not defined by IEEE 181 for a sine: null where only the sine fits. */
  riseS: SpreadOf | null;
  fallS: SpreadOf | null;
  /** Past the new state, mean, in per cent of the amplitude. */
  overshootPct: number | null;
  /** Crossings of the middle beyond the first, per transition. */
  extraMidCrossings: number | null;
};

/** Jitter of the teeth of the speed channel, the trend of the speed and the wheel's own pattern taken out. */
export type JitterStatistics = {
  teeth: number;
  periodRmsS: number;
  periodPeakToPeakS: number;
  cycleToCycleRmsS: number;
  cycleToCycleMostS: number;
  timeIntervalErrorRmsS: number;
  /** Rms time-interval error in degrees of a tooth pitch. */
  timeIntervalErrorToothDeg: number;
  /** Whether the wheel's own pattern could be taken out: it needs five turns. */
  withoutPattern: boolean;
};

export type OrderLine = { order: number; amplitude: number; phaseDeg: number };

export type CaptureStatistics = {
  /** The stretch of the capture that teeth were taken from: steady in direction, without a gap, s. */
  from: number;
  to: number;
  channels: Record<string, ChannelStatistics>;
  jitter: JitterStatistics | null;
  /** Whole turns: end of each and its mean speed, signed. */
  turns: { t: number; rpm: number }[];
  /** Once, twice, ... a turn: amplitude in rpm, of which `meanRpm` is the mean. */
  speedOrders: { turns: number; meanRpm: number; lines: OrderLine[] } | null;
  /** The same of the teeth's swing, V, from the wheel face. */
  swingOrders: { meanV: number; lines: OrderLine[] } | null;
  /** Channels A and B as sines. `phaseErrorDeg`: how much further than a quarter B stands behind A. */
  pair: { gainRatio: number; phaseDeg: number; phaseErrorDeg: number; standardErrorDeg: number } | null;
};
