/**
 * Transitions of a two-state waveform in the manner of IEEE Std 181: from inside one state's boundary to inside the
 * other's, with the instants at which 10, 50 and 90 per cent of the amplitude are crossed (interpolated linearly), and
 * how far the signal goes past its new state.
 *
 * Where the middle is crossed more than once, t50 is the first crossing and the others are counted; t10 (seen from the
 * state that is left) is the last before it, t90 the first after it. Overshoot is sought for three transition durations
 * after t90, and not past the next transition.
 * Source: IEEE Std 181-2011 by way of secondary descriptions; the length of the aberration region is from memory.
 */
import { got, notFinite, notPositive, refused, type Outcome } from '@/signal/statistics/issue';

export type Transition = {
  rising: boolean;
  /** Instants at 10, 50 and 90 % of the way from the state that is left, s. */
  t10S: number;
  t50S: number;
  t90S: number;
  /** t90 - t10, s, above 0 for either polarity. */
  durationS: number;
  /** Crossings of the middle beyond the first: 0 on a clean flank. */
  extraMidCrossings: number;
  /** Past the new state, and short of it afterwards, in per cent of the amplitude; 0 where it goes neither way. */
  overshootPct: number;
  undershootPct: number;
};

export type Transitions = {
  transitions: Transition[];
  /** Excursions that left a state by a tenth of the amplitude at least and came back without reaching the other. */
  runts: number;
};

const aberrationDurations = 3;

/**
 * @param volts `rateHz` a second, the first at `startS`.
 * @param toleranceShare half width of a state's boundary over the amplitude.
 * Issues: bad-setting, not-finite, no-two-states (levels equal or not in order). No transition is no issue: the list is empty.
 */
export function findTransitions(
  volts: ArrayLike<number>,
  startS: number,
  rateHz: number,
  { lowV, highV }: { lowV: number; highV: number },
  toleranceShare = 0.02,
): Outcome<Transitions> {
  const bad =
    notPositive(rateHz, 'sample rate') ??
    notPositive(toleranceShare, 'tolerance') ??
    notFinite([startS, lowV, highV], 'start or level') ??
    notFinite(volts, 'sample');
  if (bad) return bad;
  if (toleranceShare > 0.1)
    return refused('bad-setting', 'a state boundary wider than a tenth of the amplitude');
  if (!(highV - lowV > 1e-12 * Math.max(1, Math.abs(lowV), Math.abs(highV))))
    return refused('no-two-states', `high level ${highV} V, low level ${lowV} V`);
  // Shares of the amplitude: 0 is the low state, 1 the high one.
  const y = Float64Array.from(volts, (v) => (v - lowV) / (highV - lowV));
  const upsideDown = y.map((v) => 1 - v);
  const spans: { rising: boolean; from: number; to: number }[] = [];
  let runts = 0;
  let state = -1;
  let left = -1;
  let strayed = 0;
  for (let i = 0; i < y.length; i++) {
    const now = y[i]! <= toleranceShare ? 0 : y[i]! >= 1 - toleranceShare ? 1 : -1;
    if (now < 0) {
      if (state >= 0) strayed = Math.max(strayed, Math.abs(y[i]! - state));
      continue;
    }
    if (state >= 0 && now !== state) spans.push({ rising: now === 1, from: left, to: i });
    else if (strayed >= 0.1) runts++;
    state = now;
    left = i;
    strayed = 0;
  }
  const at = (place: number) => startS + place / rateHz;
  const transitions = spans.map(({ rising, from, to }, index) => {
    const places = crossings(rising ? y : upsideDown, from, to);
    const durationS = (places.t90 - places.t10) / rateHz;
    const end = Math.min(
      spans[index + 1]?.from ?? y.length - 1,
      Math.floor(places.t90 + aberrationDurations * (places.t90 - places.t10)),
    );
    return {
      rising,
      t10S: at(places.t10),
      t50S: at(places.t50),
      t90S: at(places.t90),
      durationS,
      extraMidCrossings: places.extra,
      ...aberrations(y, rising, to, end),
    };
  });
  return got({ transitions, runts });
}

/** Places (in samples) where a rising `y` crosses its reference levels between the samples `from` and `to`. */
function crossings(y: Float64Array, from: number, to: number) {
  let t10 = NaN;
  let t50 = NaN;
  let t90 = NaN;
  let extra = 0;
  for (let k = from; k < to; k++) {
    const before = y[k]!;
    const after = y[k + 1]!;
    const place = (level: number) => k + (level - before) / (after - before);
    const rises = (level: number) => before < level && level <= after;
    if (Number.isNaN(t50) && rises(0.1)) t10 = place(0.1);
    if (rises(0.5) || (after < 0.5 && before >= 0.5)) {
      if (Number.isNaN(t50)) t50 = place(0.5);
      else extra++;
    }
    if (Number.isNaN(t90) && rises(0.9)) t90 = place(0.9);
  }
  return { t10, t50, t90, extra };
}

function aberrations(y: Float64Array, rising: boolean, from: number, to: number) {
  const past = (i: number) => (rising ? y[i]! - 1 : -y[i]!);
  let peak = from;
  for (let i = from; i <= to; i++) if (past(i) > past(peak)) peak = i;
  let least = 0;
  for (let i = peak; i <= to; i++) least = Math.min(least, past(i));
  return { overshootPct: 100 * Math.max(0, past(peak)), undershootPct: 100 * Math.max(0, -least) };
}
