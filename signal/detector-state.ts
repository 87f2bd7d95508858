/**
 * What a band remembers between samples, and the columns that its edges are written to.
 */

export const zones = {
  unknown: 0,
  low: 1,
  lowUp: 2,
  lowBack: 3,
  high: 4,
  highDown: 5,
  highBack: 6,
  hold: 7,
  /** Low, but not yet below the release point of a band that moved down. */
  sinking: 8,
  /** High, but not yet above the operate point of a band that moved up. */
  climbing: 9,
} as const;

export type Detector = {
  zone: number;
  operateV: number;
  releaseV: number;
  midV: number;
  /** Of the band before this one, V. */
  formerOperateV: number;
  formerReleaseV: number;
  /** Beyond this a state that the band's move left unconfirmed ends, V: the far point of the band that it began with. */
  keptUpToV: number;
  /** The trough so far (low) or the peak so far (high), V. */
  extremeV: number;
  /** How far an excursion through mid has come, V. */
  reachV: number;
  /** How far it then came back, V. */
  backV: number;
  /** Last mid crossing on the flank that leaves the present state, samples; NaN where none was seen. */
  midAt: number;
  /** Size of the step across that crossing, V a sample. */
  midStepV: number;
  /** Sample at which the last rejection was decided. */
  rejectedAt: number;
  holdSamples: number;
  holdEndAt: number;
  /** Crossings of the band within hold-offs that made no edge, not even a late one at their end. */
  eatenCount: number;
  /** State during hold-off, and where a band without hold-off would be. */
  high: boolean;
  wouldBeHigh: boolean;
  /** Stream index at which the scan pauses (nothing came for long); Infinity: never. */
  pauseAt: number;
  /** The scan returns after each edge, because new thresholds follow from it. */
  pauseAtEdges: boolean;
  /** Where edges are put; whoever runs the detector empties it. */
  edges: RawEdges;
};

/** Edges as columns, in order; the first `count` are valid. Instants in samples on the stream's axis. */
export type RawEdges = {
  count: number;
  at: Float64Array;
  midAt: Float64Array;
  midStepV: Float64Array;
  extremeV: Float64Array;
  /** As in `EdgeColumns`. */
  flags: Uint8Array;
};

export type DetectorSink = {
  /** @param reachV how far it came, V; NaN for a crossing that hold-off ate. @param rising true: towards operate. */
  rejected(at: number, reachV: number, rising: boolean): void;
  /** On a flank, or short of an edge, the signal came back through mid by `backV`. */
  wobble(backV: number): void;
};

export function createDetector(holdSamples: number, pauseAtEdges: boolean): Detector {
  return {
    zone: zones.unknown,
    operateV: NaN,
    releaseV: NaN,
    midV: NaN,
    formerOperateV: NaN,
    formerReleaseV: NaN,
    keptUpToV: NaN,
    extremeV: NaN,
    reachV: NaN,
    backV: NaN,
    midAt: NaN,
    midStepV: NaN,
    rejectedAt: NaN,
    holdSamples,
    holdEndAt: NaN,
    eatenCount: 0,
    high: false,
    wouldBeHigh: false,
    pauseAt: Infinity,
    pauseAtEdges,
    edges: createRawEdges(64),
  };
}

export function createRawEdges(length: number): RawEdges {
  return {
    count: 0,
    at: new Float64Array(length),
    midAt: new Float64Array(length),
    midStepV: new Float64Array(length),
    extremeV: new Float64Array(length),
    flags: new Uint8Array(length),
  };
}

export function setThresholds(detector: Detector, operateV: number, releaseV: number): void {
  detector.formerOperateV = detector.operateV;
  detector.formerReleaseV = detector.releaseV;
  detector.operateV = operateV;
  detector.releaseV = releaseV;
  detector.midV = (operateV + releaseV) / 2;
}

/**
 * The band has moved while the signal stands at `x`: a state that it contradicts holds until the signal has confirmed it, so
 * that the move itself makes no edge. Where the signal turns back instead, to the far point of the band before, that is an
 * edge: a shaft that reverses just then would else lose one.
 */
export function keepState(detector: Detector, x: number): void {
  const { zone, midV } = detector;
  const high = zone === zones.hold ? detector.high : zone === zones.high;
  const low = zone === zones.hold ? !detector.high : zone === zones.low;
  if (high && x < midV) {
    detector.zone = zones.climbing;
    detector.keptUpToV = Math.min(detector.releaseV, detector.formerReleaseV);
  } else if (low && x > midV) {
    detector.zone = zones.sinking;
    detector.keptUpToV = Math.max(detector.operateV, detector.formerOperateV);
  }
}

/** Which state the band is in: +1 high, -1 low, 0 not known. */
export function stateOf({ zone, high }: Detector): -1 | 0 | 1 {
  switch (zone) {
    case zones.unknown:
      return 0;
    case zones.hold:
      return high ? 1 : -1;
    case zones.high:
    case zones.highDown:
    case zones.highBack:
    case zones.climbing:
      return 1;
    default:
      return -1;
  }
}

/** As it was just after an edge at `edgeAt`; the band may have moved since. */
export function resumeAfter(detector: Detector, edgeAt: number, rising: boolean): void {
  detector.zone = rising ? zones.climbing : zones.sinking;
  detector.keptUpToV = NaN;
  detector.high = detector.wouldBeHigh = rising;
  detector.holdEndAt = edgeAt + detector.holdSamples;
  detector.midAt = NaN;
  detector.midStepV = NaN;
}

/** The band's state is unknown again: after a gap, or when levels were found anew. */
export function forgetState(detector: Detector): void {
  detector.zone = zones.unknown;
  detector.midAt = NaN;
  detector.midStepV = NaN;
}
