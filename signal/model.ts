/**
 * What a rig and its settings are, as the signal path sees them. These are the shapes of the public API; the zod
 * contract of the hub is checked against them, so that the API and the mathematics cannot drift apart.
 */

import type { CaptureStatistics } from '@/signal/capture-statistics/shapes';

export type Sensing = 'single' | 'quadrature' | 'three-hall' | 'width-coded';
export type ChannelRole = 'A' | 'B' | 'Z' | 'U' | 'V' | 'W' | 'aux';
export type SensorKind = 'linear' | 'switch' | 'latch' | 'omnipolar';

export type Sensor = {
  kind: SensorKind;
  supplyV: number | null;
  /** Output of a linear sensor without field. */
  quiescentV: number | null;
  sensitivityMvPerMt: number | null;
  activeLow: boolean;
  operateMt: number | null;
  releaseMt: number | null;
};

export type Channel = {
  name: string;
  role: ChannelRole;
  /** volts = (code - codeOffset) * voltsPerCode */
  voltsPerCode: number;
  codeOffset: number;
  minCode: number | null;
  maxCode: number | null;
  /** Highest voltage that the board's input takes without harm. */
  maxInputV: number | null;
  sensor: Sensor;
};

export type WidthClass = { widthS: number; means: 'forward' | 'reverse' | 'weak' };

export type Wheel = {
  /** Positions of the wheel, the missing ones included; pole pairs for three-hall. */
  pulsesPerTurn: number;
  missingPulses: number;
  /** Turns of the wheel for one turn of the shaft. */
  gearRatio: number;
  widthClasses: WidthClass[] | null;
};

export type RigSetup = {
  sensing: Sensing;
  wheel: Wheel;
  channels: Channel[];
  expectedDirection: 'forward' | 'reverse' | null;
  ratedRpm: number | null;
};

export type FilterOrder = 2 | 4 | 6 | 8;
export type Filter =
  | { kind: 'none' }
  | { kind: 'lowpass' | 'highpass'; family: 'butterworth' | 'bessel'; order: FilterOrder; cutoffHz: number }
  | {
      kind: 'bandpass' | 'notch';
      family: 'butterworth';
      /** Counts both edges. */
      order: FilterOrder;
      lowHz: number;
      highHz: number;
    };

export type BandLevels = { operateV: number; releaseV: number };
export type Band =
  | { mode: 'fixed'; operateV: number; releaseV: number; channels?: Record<string, BandLevels> }
  | { mode: 'fitted'; operateFraction: number; releaseFraction: number };

export type SpeedMethod = 'tooth' | 'turn' | 'window';

/** The part of a settings version that the signal path needs. */
export type Settings = {
  filter: Filter | Filter[];
  band: Band;
  holdoffS: number;
  speed: { method: SpeedMethod; windowS: number; stoppedAfterS: number };
};

/** In force until a rig's first settings version. */
export const defaultSettings: Settings = {
  filter: { kind: 'none' },
  band: { mode: 'fitted', operateFraction: 0.6, releaseFraction: 0.4 },
  holdoffS: 0,
  speed: { method: 'turn', windowS: 0.1, stoppedAfterS: 2 },
};

/**
 * One channel's samples. An integer type holds ADC codes, a float type holds volts; this rule holds everywhere
 * inside the hub, whatever the wire format was.
 */
export type SampleArray =
  Uint8Array | Uint16Array | Int16Array | Uint32Array | Int32Array | Float32Array | Float64Array;

export type Direction = 'forward' | 'reverse' | 'stopped' | 'unknown';

export const findingCodes = [
  'weak-swing',
  'clipping',
  'offset-drift',
  'mains-hum',
  'edge-bounce',
  'missing-tooth',
  'extra-pulse',
  'uneven-teeth',
  'run-out',
  'phase-error',
  'duty-shift',
  'illegal-state',
  'lost-samples',
  'near-alias',
  'slow-edge',
  'dead-channel',
  'direction-flip',
  'wrong-count',
  'clock-drift',
  'standstill-chatter',
  'inverted-channel',
  'supply-ripple',
  'board-restart',
] as const;
export type FindingCode = (typeof findingCodes)[number];

export type Finding = {
  code: FindingCode;
  channel: string | null;
  /** Stream time (live) or time from the capture's first sample (analysis), s. */
  from: number;
  /** null while open. */
  to: number | null;
  severity: 'note' | 'warn' | 'fault';
  outcome: 'found' | 'cannot-tell';
  /** The instant to look at, s, on the axis of `from`. */
  at: number;
  /** Numbers with their unit in the name, e.g. `lostSamples`, `peakV`. */
  evidence: Record<string, number | string>;
  /** One sentence: what is wrong. */
  message: string;
  /** One sentence: what usually mends it. */
  remedy: string;
  /** Code of the finding that this one follows from. */
  causedBy: FindingCode | null;
};

/** How far the worst tooth of the last turns stands above the operate and below the release point. */
export type Margin = {
  /** Worst channel. */
  channel: string;
  volts: number;
  /** In noise sigmas; null where the noise is not known. */
  sigmas: number | null;
  /** Linear sensors with a known sensitivity only. */
  millitesla: number | null;
};

/** Per tooth: what the wheel face draws. Angles in degrees of the wheel, position 0 first. */
export type WheelFace = {
  /** Position numbers are fixed to the wheel (gap, index) or only relative. */
  numbered: boolean;
  positions: {
    angleDeg: number;
    /** Measured minus nominal angle; null where not known. */
    spacingErrorDeg: number | null;
    /** Peak to peak of the tooth, V; null where the position is missing or not seen. */
    swingV: number | null;
    missing: boolean;
    count: number;
  }[];
  /** Angle of the shaft now, degrees, or null. */
  angleDeg: number | null;
};

/** JSON shape of `GET /captures/:id/analysis`. */
export type Analysis = {
  channels: Record<
    string,
    {
      lowV: number | null;
      highV: number | null;
      operateV: number | null;
      releaseV: number | null;
      band: { t: number; operateV: number; releaseV: number }[];
      edges: { t: number; midT: number; rising: boolean; late?: boolean }[];
    }
  >;
  speed: { t: number; rpm: number | null; errorRpm: number | null }[];
  direction: { from: number; to: number; value: Direction }[];
  turns: number;
  positions: number;
  pulses: number;
  gaps: { from: number; to: number; lostSamples: number; estimated: boolean }[];
  delayS: number;
  margin: Margin | null;
  wheelFace: WheelFace | null;
  statistics: CaptureStatistics | null;
  findings: Finding[];
};

export type Ok<T> = { ok: true; value: T };
export type Failed<I> = { ok: false; issue: I };
export type Result<T, I> = Ok<T> | Failed<I>;
