/**
 * Channels A and B as two sines of one and the same frequency: gain ratio, offsets, and the phase between them.
 * The phase error is the distance from the ideal quarter, phase A - phase B = 90 degrees for motion forward.
 * One frequency from two fits: their mean, weighted by amplitude squared (equal noise on both channels).
 */
import { got, type Outcome } from '@/signal/statistics/issue';
import { fitSine, fitSineAndFrequency, type Sine, type TimedSine } from '@/signal/statistics/sine-fit';

export type SinePair<S extends Sine = Sine> = {
  a: S;
  b: S;
  /** Amplitude of A over that of B. */
  gainRatio: number;
  /** Phase A - phase B, degrees, above -180 to 180: positive where A comes first. */
  phaseDeg: number;
  /** Standard error of `phaseDeg` for residuals that are white. */
  phaseDegError: number;
  /**
   * How much further than a quarter B's sensor stands behind A's, degrees, above -180 to 180: the same whichever way the
   * shaft turns, since turning back negates `phaseDeg`.
   */
  phaseErrorDeg: number;
};

export type PairDirection = 'forward' | 'reverse';

/** Angle in degrees brought above -180 to 180. */
export function wrapDeg(deg: number): number {
  const turned = deg - 360 * Math.floor((deg + 180) / 360);
  return turned === -180 ? 180 : turned;
}

/** Two fitted sines of one frequency beside each other: volts over volts, degrees; `direction` is what the shaft did meanwhile. */
export function compareSines<S extends Sine>(a: S, b: S, direction: PairDirection): SinePair<S> {
  const degPerRad = 180 / Math.PI;
  const phaseDeg = wrapDeg((a.phaseRad - b.phaseRad) * degPerRad);
  return {
    a,
    b,
    gainRatio: a.amplitudeV / b.amplitudeV,
    phaseDeg,
    phaseDegError: Math.hypot(a.phaseErrorRad, b.phaseErrorRad) * degPerRad,
    phaseErrorDeg: wrapDeg(direction === 'forward' ? phaseDeg - 90 : -90 - phaseDeg),
  };
}

/** Both channels at the known frequency; a reference for tests, the product fits in the tooth phase. `aV` and `bV` begin with the same instant. Issues: as `fitSine`. */
export function fitSinePair(
  aV: ArrayLike<number>,
  bV: ArrayLike<number>,
  rateHz: number,
  hz: number,
  direction: PairDirection,
): Outcome<SinePair<TimedSine>> {
  const a = fitSine(aV, rateHz, hz);
  if (!a.ok) return a;
  const b = fitSine(bV, rateHz, hz);
  return b.ok ? got(compareSines(a.value, b.value, direction)) : b;
}

/** Both channels, their common frequency searched from `startHz`; a reference as well. Issues: as `fitSineAndFrequency`. */
export function fitSinePairAndFrequency(
  aV: ArrayLike<number>,
  bV: ArrayLike<number>,
  rateHz: number,
  startHz: number,
  direction: PairDirection,
): Outcome<SinePair<TimedSine>> {
  const a = fitSineAndFrequency(aV, rateHz, startHz);
  if (!a.ok) return a;
  const b = fitSineAndFrequency(bV, rateHz, startHz);
  if (!b.ok) return b;
  const weightA = a.value.amplitudeV ** 2;
  const weightB = b.value.amplitudeV ** 2;
  const hz = (weightA * a.value.hz + weightB * b.value.hz) / (weightA + weightB);
  return fitSinePair(aV, bV, rateHz, hz, direction);
}
