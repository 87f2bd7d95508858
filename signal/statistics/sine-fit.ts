/**
 * Sine of best fit to a channel that is nearly a sine: y = a cos(psi) + b sin(psi) + c by least squares, amplitude
 * sqrt(a^2 + b^2), phase atan2(-b, a) (cosine convention: y = A cos(psi + phase) + c).
 *
 * Three parameters: the frequency is known, or psi is the phase within the tooth from its own edges, which stays right
 * while the speed changes. Four: the frequency is searched by repeated linear fits with one more column, the slope by it.
 * Sources: IEEE Std 1057 / 1241 (three- and four-parameter fits) by way of open implementations; P. Handel, IEEE Trans.
 * I&M 49 (2000) 1189-1193; error of the phase sqrt(2 / K) sigma / A, the textbook bound for white noise.
 */
import { got, notFinite, notPositive, refused, type Outcome } from '@/signal/statistics/issue';
import { leastSquares } from '@/signal/statistics/least-squares';

export type Sine = {
  amplitudeV: number;
  offsetV: number;
  /** Where psi = 0 (for fits over time: at the first sample), -pi..pi. */
  phaseRad: number;
  /** Root of the mean squared residual, degrees of freedom taken off. */
  residualRmsV: number;
  /** Standard errors for residuals that are white. */
  amplitudeErrorV: number;
  phaseErrorRad: number;
};

export type TimedSine = Sine & { hz: number; iterations: number };

/** An amplitude of noise alone reaches five of its errors once in 270 000 fits (exp(-12.5)). */
const leastSigmas = 5;
const leastCycles = 1.5;
/** Error of an amplitude over what phases spread evenly would leave: more, and they cover too little of the circle. */
const mostSpread = 3;
const leastSamples = 5;
const mostIterations = 20;
const settledShare = 1e-9;

/**
 * Fits in the phase `psiRad`, one a sample; it may be wrapped or not.
 * Issues: too-few, not-finite, bad-setting (lengths differ), undetermined (phases do not go round), no-swing.
 */
export function fitSineInPhase(volts: ArrayLike<number>, psiRad: ArrayLike<number>): Outcome<Sine> {
  if (volts.length !== psiRad.length)
    return refused('bad-setting', `${volts.length} samples, ${psiRad.length} phases`);
  if (volts.length < leastSamples)
    return refused('too-few', `${volts.length} samples given, ${leastSamples} needed`);
  const bad = notFinite(volts, 'sample') ?? notFinite(psiRad, 'phase');
  if (bad) return bad;
  return fitted(volts, [
    Float64Array.from(psiRad, Math.cos),
    Float64Array.from(psiRad, Math.sin),
    new Float64Array(volts.length).fill(1),
  ]);
}

/**
 * Three-parameter fit of samples 1 / `rateHz` apart at the known frequency `hz`.
 * Issues: as above, and too-few for less than one and a half cycles.
 */
export function fitSine(volts: ArrayLike<number>, rateHz: number, hz: number): Outcome<TimedSine> {
  const bad = badSpan(volts.length, rateHz, hz);
  if (bad) return bad;
  const step = (2 * Math.PI * hz) / rateHz;
  const fit = fitSineInPhase(
    volts,
    Float64Array.from({ length: volts.length }, (_, k) => step * k),
  );
  return fit.ok ? got({ ...fit.value, hz, iterations: 0 }) : fit;
}

/**
 * Four-parameter fit: the frequency too. A reference for tests: captures are fitted in the tooth phase, which follows a
 * changing speed. From a start that must be nearer than half a cycle over the record.
 * Issues: as for three parameters, and not-converged (20 rounds; or it walked further than that from its start).
 */
export function fitSineAndFrequency(
  volts: ArrayLike<number>,
  rateHz: number,
  startHz: number,
): Outcome<TimedSine> {
  let hz = startHz;
  let sine = fitSine(volts, rateHz, hz);
  const recordS = volts.length / rateHz;
  for (let iterations = 1; sine.ok && iterations <= mostIterations; iterations++) {
    const next = frequencyStep(volts, rateHz, hz, sine.value);
    if (!next.ok) return next;
    hz += next.value;
    if (Math.abs(hz - startHz) >= 0.5 / recordS)
      return refused('not-converged', `went from ${startHz} to ${hz} Hz in a record of ${recordS} s`);
    sine = fitSine(volts, rateHz, hz);
    if (sine.ok && Math.abs(next.value) < settledShare * hz) return got({ ...sine.value, iterations });
  }
  return sine.ok ? refused('not-converged', `still moving after ${mostIterations} rounds`) : sine;
}

/** How far the frequency is off, Hz, by one linear fit with the slope by frequency as a fourth column. */
function frequencyStep(
  volts: ArrayLike<number>,
  rateHz: number,
  hz: number,
  { amplitudeV, phaseRad }: Sine,
): Outcome<number> {
  const step = (2 * Math.PI * hz) / rateHz;
  const rows = { length: volts.length };
  // Counted from the middle of the record, and in cycles over the record, so that the four columns are of one size.
  const middle = (volts.length - 1) / 2;
  const scale = (2 * Math.PI) / volts.length;
  const fit = leastSquares(
    [
      Float64Array.from(rows, (_, k) => Math.cos(step * k)),
      Float64Array.from(rows, (_, k) => Math.sin(step * k)),
      new Float64Array(volts.length).fill(1),
      Float64Array.from(rows, (_, k) => -scale * (k - middle) * amplitudeV * Math.sin(step * k + phaseRad)),
    ],
    volts,
  );
  return fit.ok ? got((fit.value.x[3]! * rateHz) / volts.length) : fit;
}

function fitted(volts: ArrayLike<number>, columns: Float64Array[]): Outcome<Sine> {
  const fit = leastSquares(columns, volts);
  if (!fit.ok) return fit;
  const { x, residualRms, errorShares } = fit.value;
  const [a, b, c] = x as unknown as [number, number, number];
  const amplitudeV = Math.hypot(a, b);
  const errorShare = Math.max(errorShares[0]!, errorShares[1]!);
  if (errorShare > mostSpread * Math.sqrt(2 / volts.length))
    return refused('undetermined', 'the samples cover too little of the cycle');
  const amplitudeErrorV = residualRms * errorShare;
  // What rounding alone leaves of a constant signal is no amplitude either.
  if (!(amplitudeV > Math.max(leastSigmas * amplitudeErrorV, 1e-12 * Math.abs(c))))
    return refused('no-swing', `amplitude ${amplitudeV} V with an error of ${amplitudeErrorV} V`);
  return got({
    amplitudeV,
    offsetV: c,
    phaseRad: Math.atan2(-b, a),
    residualRmsV: residualRms,
    amplitudeErrorV,
    phaseErrorRad: amplitudeErrorV / amplitudeV,
  });
}

function badSpan(samples: number, rateHz: number, hz: number): ReturnType<typeof refused> | null {
  const bad = notPositive(rateHz, 'sample rate') ?? notPositive(hz, 'frequency');
  if (bad) return bad;
  if (hz >= rateHz / 2)
    return refused('bad-setting', `${hz} Hz is not below half the rate of ${rateHz} samples a second`);
  const cycles = (samples * hz) / rateHz;
  return cycles < leastCycles
    ? refused('too-few', `${cycles} cycles in the record, ${leastCycles} needed`)
    : null;
}
