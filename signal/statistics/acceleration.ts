/**
 * Angular acceleration from edges and the angles between them, written out: a reference for tests. The product's own, over
 * whole turns of a running signal, is in `acceleration-fit.ts`.
 *
 * From three edges: w1 = d1 / (t1 - t0), w2 = d2 / (t2 - t1), alpha = (w2 - w1) / ((t2 - t0) / 2), exact for an even
 * acceleration but mostly noise (sigma = sqrt(6) d s / T^3 for edges of the error s): a quadratic through all edges
 * of a turn or more is quiet. Source: formula; derived from theta = theta0 + w t + alpha t^2 / 2.
 */
import { got, notInstants, notPositive, refused, type Outcome } from '@/signal/statistics/issue';
import { leastSquares } from '@/signal/statistics/least-squares';

/** One rev/min in rad/s. */
export const radPerSPerRpm = (2 * Math.PI) / 60;

/**
 * Alpha by three neighbouring edges each, rad/s^2: one for each edge but the first and the last.
 * @param edgesS s. @param stepRad angle between neighbours, one for all or one an interval.
 * Issues: too-few (three edges), not-finite, not-ascending, bad-setting (steps).
 */
export function accelerations(
  edgesS: ArrayLike<number>,
  stepRad: number | ArrayLike<number>,
): Outcome<Float64Array> {
  const bad = notInstants(edgesS, 3, 'edge') ?? badSteps(stepRad, edgesS.length - 1);
  if (bad) return bad;
  const speed = (k: number) => stepAt(stepRad, k) / (edgesS[k + 1]! - edgesS[k]!);
  return got(
    Float64Array.from(
      { length: edgesS.length - 2 },
      (_, k) => (2 * (speed(k + 1) - speed(k))) / (edgesS[k + 2]! - edgesS[k]!),
    ),
  );
}

/** Standard error of such an alpha, rad/s^2, for teeth `stepRad` and `periodS` apart with the error `edgeErrorS` each. */
export function accelerationNoise(stepRad: number, periodS: number, edgeErrorS: number): number {
  return (Math.sqrt(6) * stepRad * edgeErrorS) / periodS ** 3;
}

export type AccelerationFit = {
  alphaRadPerS2: number;
  /** Speed at the middle of the span and at its end, rad/s. */
  middleRadPerS: number;
  endRadPerS: number;
  middleS: number;
  /** Standard error of alpha from the scatter about the fit, uneven teeth included. */
  alphaError: number;
  residualRmsRad: number;
};

/**
 * theta(t) as a quadratic through edges that span a turn at least.
 * @param stepRad as above; steps learnt for the wheel make the fit quiet.
 * @param turnRad angle that the span must reach.
 * Issues: too-few (four edges; less than a turn), not-finite, not-ascending, bad-setting.
 */
export function fitAcceleration(
  edgesS: ArrayLike<number>,
  stepRad: number | ArrayLike<number>,
  turnRad = 2 * Math.PI,
): Outcome<AccelerationFit> {
  const bad = notInstants(edgesS, 4, 'edge') ?? badSteps(stepRad, edgesS.length - 1);
  if (bad) return bad;
  const n = edgesS.length;
  const theta = new Float64Array(n);
  for (let k = 1; k < n; k++) theta[k] = theta[k - 1]! + stepAt(stepRad, k - 1);
  if (theta[n - 1]! < turnRad * (1 - 1e-9))
    return refused('too-few', `edges over ${theta[n - 1]} rad, ${turnRad} needed`);
  const halfS = (edgesS[n - 1]! - edgesS[0]!) / 2;
  const middleS = edgesS[0]! + halfS;
  const z = Float64Array.from({ length: n }, (_, k) => (edgesS[k]! - middleS) / halfS);
  const fit = leastSquares([z.map(() => 1), z, z.map((x) => x * x)], theta);
  if (!fit.ok) return fit;
  const { x, residualRms, errorShares } = fit.value;
  const alphaRadPerS2 = (2 * x[2]!) / halfS ** 2;
  const middleRadPerS = x[1]! / halfS;
  return got({
    alphaRadPerS2,
    middleRadPerS,
    endRadPerS: middleRadPerS + alphaRadPerS2 * halfS,
    middleS,
    alphaError: (2 * errorShares[2]! * residualRms) / halfS ** 2,
    residualRmsRad: residualRms,
  });
}

function stepAt(stepRad: number | ArrayLike<number>, k: number): number {
  return typeof stepRad === 'number' ? stepRad : stepRad[k]!;
}

function badSteps(stepRad: number | ArrayLike<number>, intervals: number) {
  if (typeof stepRad === 'number') return notPositive(stepRad, 'step');
  if (stepRad.length !== intervals)
    return refused('bad-setting', `${stepRad.length} steps for ${intervals} intervals`);
  for (let k = 0; k < intervals; k++) {
    const bad = notPositive(stepRad[k]!, `step ${k}`);
    if (bad) return bad;
  }
  return null;
}
