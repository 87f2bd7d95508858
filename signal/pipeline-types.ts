/**
 * What the signal path takes and gives. Live, replay, rerun, proof and preview all run `createPipeline`; splitting a
 * stream into blocks anywhere changes none of its output, bit for bit.
 *
 * Times are seconds on the raw signal's axis, 0 at sample index 0 of the stream (or of the capture).
 */
import type { SyncLoss, SyncState } from '@/signal/gap-sync';
import type { Direction, Finding, Margin, RigSetup, SampleArray, Settings, WheelFace } from '@/signal/model';
import type { SpeedLimits } from '@/signal/speed-limits';

export type PipelineOptions = {
  rig: RigSetup;
  settings: Settings;
  rateHz: number;
  /** Names of the channels present, in the order of the arrays given to `process`. A subset of the rig's. */
  channels: readonly string[];
  /** Sample index on the stream's axis of the first sample to come (0 unless settings changed mid-stream). */
  startIndex: number;
  tap?: SampleTap;
  /** Samples come filtered forward and backward beside the raw ones (captures only): nothing is delayed. */
  bothWays?: boolean;
};

/** Sees the filtered samples as they pass, for statistics of a capture. */
export interface SampleTap {
  /** `v[from..from + count)` of channel `channel`; the first is sample `at` of the stream. Not to be kept. */
  chunk(channel: number, v: Float64Array, from: number, count: number, at: number): void;
  /** At fixed places of the stream, after all that was decided there. */
  tick(now: MotionNow): void;
  gap(now: MotionNow): void;
}

/** Teeth of the first channel and disturbances of the motion so far. */
export type MotionNow = { state: 'running' | 'stopped' | 'unknown'; teeth: number; disturbances: number };

/** Why a pipeline cannot be built from these settings. Wording for people is in `detail`. */
export type SetupIssue = {
  code:
    | 'cutoff-above-nyquist'
    | 'cutoff-not-positive'
    | 'band-inverted'
    | 'band-channel-unknown'
    | 'no-pulses'
    | 'too-many-missing'
    | 'bad-rate'
    | 'channel-missing'
    | 'bad-filter'
    | 'bad-gear'
    | 'bad-holdoff'
    | 'bad-speed'
    | 'too-many-pulses'
    | 'gap-not-followed'
    | 'no-widths'
    | 'bad-widths'
    | 'bad-number'
    | 'bad-codes'
    | 'bad-scale'
    | 'channel-twice'
    | 'role-twice'
    | 'bad-band'
    | 'band-outside'
    | 'bad-start';
  /** JSON pointer into the settings or the rig. */
  pointer: string;
  detail: string;
};

/** Edges of one channel as columns; only the first `count` entries are valid. */
export type EdgeColumns = {
  count: number;
  /** When the band switched, s. */
  t: Float64Array;
  /** Last mid-level crossing on the same flank, s; what speed is computed from. */
  midT: Float64Array;
  /** Bit 0: rising. Bit 1: late (made at the end of a hold-off). */
  flags: Uint8Array;
};
export const edgeRising = 1;
export const edgeLate = 2;

/** Crossings of a threshold that were not counted (hold-off, or a peak inside the band): hollow marks of the rail. */
export type RejectedColumns = { count: number; t: Float64Array };

export type SpeedColumns = {
  count: number;
  t: Float64Array;
  /** NaN opens an unknown stretch. */
  rpm: Float64Array;
  /** NaN where not known. */
  errorRpm: Float64Array;
};

export type DirectionChange = { t: number; value: Direction };
export type BandChange = { channel: string; t: number; operateV: number; releaseV: number };
export type Gap = { fromS: number; toS: number; lostSamples: number; estimated: boolean };

/** Everything since the last `drain`. */
export type PipelineOutput = {
  edges: readonly EdgeColumns[];
  rejected: readonly RejectedColumns[];
  speed: SpeedColumns;
  directions: DirectionChange[];
  bands: BandChange[];
  gaps: Gap[];
  /** Findings that were closed since the last drain, with `to` set. Open ones are in `status().findings`. */
  closedFindings: Finding[];
};

export type ChannelStatus = {
  channel: string;
  lowV: number | null;
  highV: number | null;
  operateV: number | null;
  releaseV: number | null;
  noiseV: number | null;
  /** High share of the period, 0..1. */
  duty: number | null;
  edges: number;
};

/** What stands behind the speed. */
export type ShaftStatus = {
  /** From whole turns; null where not known. */
  accelerationRpmPerS: number | null;
  accelerationErrorRpmPerS: number | null;
  /** What the way to take the speed resolves, how late it is, how slow it reads. */
  limits: SpeedLimits;
  /** Spacing of the teeth, learnt over turns and taken out of the speed between them. `uneven`: rms, share of a pitch. */
  pitch: {
    state: 'none' | 'learning' | 'in-use';
    turns: number;
    turnsNeeded: number;
    uneven: number | null;
  };
  /** Missing-tooth wheels only. */
  sync: { state: SyncState; lostBecause: SyncLoss | null; gapRatio: number | null } | null;
  /** Rigs with an index channel only: counts a turn against what the wheel makes. */
  index: {
    expectedCounts: number;
    meanCounts: number | null;
    exactTurns: number;
    lostTurns: number;
    extraTurns: number;
  } | null;
  /** Rings of states only: steps that cannot have been, and states that the ring does not have. */
  falseSteps: { illegal: number; invalidStates: number } | null;
};

/** The state at the last sample processed. */
export type PipelineStatus = {
  /** Stream time of the newest sample, s (index of the next sample / rate). */
  nowS: number;
  /** running: a speed is known; stopped: no edge for `stoppedAfterS`; unknown: samples, but no speed yet. */
  state: 'running' | 'stopped' | 'unknown';
  /** Signed by direction; null where not known; 0 once stopped; never above `speedAtMostRpm` in magnitude. */
  speedRpm: number | null;
  speedErrorRpm: number | null;
  /** Falling bound since the last edge; null before any edge. Floor of what can be seen once stopped. */
  speedAtMostRpm: number | null;
  direction: Direction;
  pulses: number;
  positions: number;
  turns: number;
  /** Since when the counters count, s: 0, or the end of the last gap's first edge. */
  countsSinceS: number;
  /** In sync with a missing-tooth wheel (always true on a plain wheel). */
  synced: boolean;
  toothHz: number | null;
  lastEdgeS: number | null;
  /** Delay taken off edge times now, s. */
  delayS: number;
  /** A leads B by so many degrees of a period; quadrature only. */
  phaseDeg: number | null;
  channels: ChannelStatus[];
  margin: Margin | null;
  wheelFace: WheelFace | null;
  shaft: ShaftStatus;
  findings: Finding[];
};

/** What the hub knows of a board beside its samples. */
export type BoardNote =
  /** A block came: stream time at its end, and the hub's steady clock then, s. */
  | { kind: 'arrival'; streamS: number; hubS: number }
  /** This stream begins where another had just been running; `restarts` in the last ten minutes, this one included. */
  | { kind: 'restart'; awayS: number; restarts: number };

export interface Pipeline {
  /**
   * `arrays[i]` belongs to `channels[i]`; all hold `count` valid samples, finite, in the array's own type.
   * @param filtered the same in volts, filtered both ways; given always or never, as `bothWays` says.
   */
  process(arrays: readonly SampleArray[], count: number, filtered?: readonly Float64Array[]): void;
  /**
   * Samples that were lost: time runs on, filters are primed anew, the band's state is unknown. False, and nothing happens,
   * where their number, rounded, is below 1, no number, or leads beyond the samples that can be numbered.
   */
  skip(lostSamples: number, estimated: boolean): boolean;
  /** For findings that samples alone cannot show. */
  note(note: BoardNote): void;
  /** The output since the last drain; valid until the next call of `process`, `skip` or `drain`. */
  readonly output: PipelineOutput;
  /** What a tap is told. */
  motionNow(): MotionNow;
  /** Empties the output. */
  drain(): void;
  /** Computed at each call; cheap enough for 25 calls a second. */
  status(): PipelineStatus;
}
