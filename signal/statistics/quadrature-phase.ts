/**
 * Phase between two switched channels, the widths of the four states that follow from it, and the speed up to which a
 * sample rate sees every state.
 *
 *     phi = 360 circular mean of (rise of B - rise of A before it) / period of A
 *     A only phi, both 360 D_A - phi, B only phi + 360 (D_B - D_A), none 360 - phi - 360 D_B
 *     n_max = 60 fs (w_min / 90) / (4 PPR k), k samples a state
 *
 * The widths hold for any phase when they are taken as what two arcs of the circle have in common, as here.
 * Source: geometry; the circular mean is the textbook's (K. V. Mardia, Statistics of Directional Data, 1972).
 */
import { got, notInstants, notPositive, refused, type Outcome } from '@/signal/statistics/issue';
import { wrapDeg, type PairDirection } from '@/signal/statistics/sine-pair';

export type QuadraturePhase = {
  /** B behind A, 0 to below 360 degrees of a tooth; near 90 forward, near 270 reverse. */
  phaseDeg: number;
  /** How much further than a quarter B's sensor stands behind A's, degrees: the same in both directions. */
  errorDeg: number;
  /** Scatter of single periods, degrees (circular standard deviation). */
  scatterDeg: number;
  periods: number;
};

/** Mean resultant length below which the phases point everywhere. */
const leastResultant = 0.5;

/**
 * @param aRisesS, bRisesS rises of A and of B at mid level, s. Periods of A without exactly one rise of B are left out.
 * Issues: too-few, not-finite, not-ascending, undetermined (phases all over the circle: the two are not locked).
 */
export function quadraturePhase(
  aRisesS: ArrayLike<number>,
  bRisesS: ArrayLike<number>,
  direction: PairDirection,
): Outcome<QuadraturePhase> {
  const bad = notInstants(aRisesS, 2, 'rise of A') ?? notInstants(bRisesS, 1, 'rise of B');
  if (bad) return bad;
  let re = 0;
  let im = 0;
  let periods = 0;
  let b = 0;
  for (let k = 0; k + 1 < aRisesS.length; k++) {
    const from = aRisesS[k]!;
    const to = aRisesS[k + 1]!;
    while (b < bRisesS.length && bRisesS[b]! < from) b++;
    const first = b;
    while (b < bRisesS.length && bRisesS[b]! < to) b++;
    if (b - first !== 1) continue;
    const angle = (2 * Math.PI * (bRisesS[first]! - from)) / (to - from);
    re += Math.cos(angle);
    im += Math.sin(angle);
    periods++;
  }
  if (periods === 0) return refused('too-few', 'no period of A holds exactly one rise of B');
  const resultant = Math.min(1, Math.hypot(re, im) / periods);
  if (resultant < leastResultant)
    return refused('undetermined', `phases of ${periods} periods point everywhere (resultant ${resultant})`);
  const degPerRad = 180 / Math.PI;
  const phaseDeg = (Math.atan2(im, re) * degPerRad + 360) % 360;
  return got({
    phaseDeg,
    errorDeg: wrapDeg(direction === 'forward' ? phaseDeg - 90 : 270 - phaseDeg),
    scatterDeg: Math.sqrt(-2 * Math.log(resultant)) * degPerRad,
    periods,
  });
}

export type StateWidths = {
  aOnlyDeg: number;
  bothDeg: number;
  bOnlyDeg: number;
  noneDeg: number;
  narrowestDeg: number;
};

/** Widths of the four states, degrees of a tooth, sum 360. Duties 0..1. Issues: bad-setting. */
export function stateWidths(phaseDeg: number, dutyA: number, dutyB: number): Outcome<StateWidths> {
  if (!Number.isFinite(phaseDeg)) return refused('bad-setting', `phase ${phaseDeg} degrees`);
  for (const duty of [dutyA, dutyB])
    if (!(duty >= 0 && duty <= 1)) return refused('bad-setting', `duty factor ${duty}`);
  const phase = ((phaseDeg % 360) + 360) % 360;
  const highA = 360 * dutyA;
  const highB = 360 * dutyB;
  // A is high from 0 to highA; B from phase on, and once more from where it wraps round.
  const overlap = (from: number) => Math.max(0, Math.min(highA, from + highB) - Math.max(0, from));
  const bothDeg = overlap(phase) + overlap(phase - 360);
  const widths = {
    aOnlyDeg: highA - bothDeg,
    bothDeg,
    bOnlyDeg: highB - bothDeg,
    noneDeg: 360 - highA - highB + bothDeg,
  };
  return got({ ...widths, narrowestDeg: Math.max(0, Math.min(...Object.values(widths))) });
}

/**
 * Highest speed at which every state is sampled `samplesPerState` times, rev/min.
 * @param pulsesPerTurn pulses of one channel a turn.
 * Issues: bad-setting; undetermined where a state has no width at all (then no rate suffices).
 */
export function quadratureLimitRpm(
  rateHz: number,
  pulsesPerTurn: number,
  narrowestDeg = 90,
  samplesPerState = 1,
): Outcome<number> {
  const bad =
    notPositive(rateHz, 'sample rate') ??
    notPositive(pulsesPerTurn, 'pulses a turn') ??
    notPositive(samplesPerState, 'samples a state');
  if (bad) return bad;
  if (!(narrowestDeg > 0 && narrowestDeg <= 90))
    return refused('undetermined', `narrowest state of ${narrowestDeg} degrees`);
  return got((60 * rateHz * (narrowestDeg / 90)) / (4 * pulsesPerTurn * samplesPerState));
}
