import type { RailEdge } from '@/client/drawings/rail-marks';
import type { Columns, Range } from '@/client/drawings/trace';

export type RibbonLane = Columns & {
  channel: string;
  lowV: number | null;
  highV: number | null;
  clipLowV: number | null;
  clipHighV: number | null;
  /** The band over time, in order; one stretch where it stands still. */
  bands: readonly { from: number; to: number; operateV: number; releaseV: number }[];
};

export type RibbonGap = { from: number; to: number; lostSamples: number; estimated: boolean };

/** What the ribbon draws, live or replayed. Seconds on one axis throughout. */
export type RibbonData = {
  fromS: number;
  toS: number;
  lanes: readonly RibbonLane[];
  edges: readonly RailEdge[];
  rejected: readonly { channel: string; t: number }[];
  /** How many there are, where the lists hold only what can be told apart in the picture. */
  counts?: { teeth: number; rejected: number };
  gaps: readonly RibbonGap[];
};

export type LaneBox = {
  lane: RibbonLane;
  top: number;
  bottom: number;
  traceTop: number;
  traceBottom: number;
  thin: boolean;
  range: Range;
};
