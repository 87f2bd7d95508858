/**
 * A reference for tests, in the plainest form; the product learns edge by edge in `pitch-learner.ts`, and is held against it.
 *
 * The teeth's own spacing, learnt over turns: share of the turn w[k] = mean over turns of the angle from tooth k to the
 * next. Speed from single teeth is then n = 60 w[k] / T[k] instead of 60 / (N T[k]).
 *
 * A changing speed would tilt every turn's pattern. It is taken out by theta(t), a quadratic through three passes of the
 * SAME tooth (start of the turn before, start and end of this one), which the pattern cannot bend: exact for an even
 * acceleration. A turn is used where acceleration changes the speed by less than 0.1 % from tooth to tooth.
 * Accepted after 20 turns where every tooth's share scatters by less than 0.5 % of a pitch and none (gaps aside) is off
 * by a tenth of a pitch.
 * Sources: self-calibration from time stamps, Lu et al., CIRP Annals 59 (2010) 529-534; the conditions are ours.
 *
 * Patterns differ by direction and by flank: keep a learner for each (`createPitchLearners`).
 */
import {
  got,
  notCount,
  notFinite,
  notInstants,
  notPositive,
  refused,
  type Outcome,
} from '@/signal/statistics/issue';

export type PitchLearner = {
  /** Ideal share of each interval, sum 1, from the mark on; a gap's is that of all its positions. */
  nominal: Float64Array;
  /** An interval that is wider than the narrowest one: a gap, whose share may be anything. */
  turns: number;
  mean: Float64Array;
  squares: Float64Array;
  /** Start and end of the last turn given, s; NaN before. */
  lastStartS: number;
  lastEndS: number;
};

const leastTurns = 20;
const mostScatter = 0.005;
const mostOff = 0.1;
const mostSpeedChange = 0.001;

/** Ideal shares of a wheel of `positions` of which `missing` in a row, at the end of the turn, have no tooth. */
export function idealShares(positions: number, missing = 0): Outcome<Float64Array> {
  const bad =
    notCount(positions, 1, 'number of positions') ?? notCount(missing, 0, 'number of missing teeth');
  if (bad) return bad;
  if (missing >= positions) return refused('bad-setting', `${missing} of ${positions} positions missing`);
  const shares = new Float64Array(positions - missing).fill(1 / positions);
  shares[shares.length - 1] = (missing + 1) / positions;
  return got(shares);
}

/** @param nominal as `idealShares` gives it. Issues: bad-setting. */
export function createPitchLearner(nominal: ArrayLike<number>): Outcome<PitchLearner> {
  if (nominal.length < 2) return refused('bad-setting', 'a wheel of one tooth has no pitch to learn');
  let sum = 0;
  for (let k = 0; k < nominal.length; k++) {
    const bad = notPositive(nominal[k]!, `share ${k}`);
    if (bad) return bad;
    sum += nominal[k]!;
  }
  if (Math.abs(sum - 1) > 1e-9) return refused('bad-setting', `shares add up to ${sum}, not 1`);
  return got({
    nominal: Float64Array.from(nominal),
    turns: 0,
    mean: new Float64Array(nominal.length),
    squares: new Float64Array(nominal.length),
    lastStartS: NaN,
    lastEndS: NaN,
  });
}

export type PitchLearners = { forward: PitchLearner; reverse: PitchLearner };

/** One learner for each direction; `reverse` sees its intervals in the order in which they pass. Issues: bad-setting. */
export function createPitchLearners(nominal: ArrayLike<number>): Outcome<PitchLearners> {
  const forward = createPitchLearner(nominal);
  if (!forward.ok) return forward;
  const reverse = createPitchLearner(Float64Array.from(nominal).reverse());
  return reverse.ok ? got({ forward: forward.value, reverse: reverse.value }) : reverse;
}

/** Forgets the turn before: a stop, a gap in the data or a reversal lies between. What is learnt stays. */
export function breakPitch(learner: PitchLearner): void {
  learner.lastStartS = learner.lastEndS = NaN;
}

/**
 * Takes one turn's instants: from its mark to the next turn's mark, one more than intervals. The first turn after a break
 * only primes. The turn must begin where the last ended, else it primes too.
 * @returns shares of this turn, or null where it primed.
 * Issues (nothing learnt): too-few, not-finite, not-ascending, bad-setting (another number of teeth), not-steady.
 */
export function learnTurn(learner: PitchLearner, teethS: ArrayLike<number>): Outcome<Float64Array | null> {
  const n = learner.nominal.length;
  const bad = notInstants(teethS, 2, 'tooth');
  if (bad) return bad;
  if (teethS.length !== n + 1)
    return refused('bad-setting', `${teethS.length} instants for a turn of ${n} intervals`);
  const startS = teethS[0]!;
  const endS = teethS[n]!;
  const beforeS = learner.lastEndS === startS ? learner.lastStartS : NaN;
  learner.lastStartS = startS;
  learner.lastEndS = endS;
  if (Number.isNaN(beforeS)) return got(null);
  // theta = a t + b t^2 in turns, 0 at the start of this turn, -1 at the turn before's, 1 at the end.
  const p = startS - beforeS;
  const q = endS - startS;
  const b = (p - q) / (p * q * (p + q));
  const a = 1 / q - b * q;
  const slowest = Math.min(a, a + 2 * b * q);
  if (!(slowest > 0 && (2 * Math.abs(b)) / (n * slowest ** 2) < mostSpeedChange))
    return refused('not-steady', `turns of ${p} and ${q} s in a row`);
  const shares = new Float64Array(n);
  const theta = (t: number) => a * t + b * t * t;
  learner.turns++;
  for (let k = 0; k < n; k++) {
    const share = theta(teethS[k + 1]! - startS) - theta(teethS[k]! - startS);
    const off = share - learner.mean[k]!;
    shares[k] = share;
    learner.mean[k] = learner.mean[k]! + off / learner.turns;
    learner.squares[k] = learner.squares[k]! + off * (share - learner.mean[k]!);
  }
  return got(shares);
}

export type LearntPitch = {
  turns: number;
  /** Share of the turn of each interval, sum 1; times 360 are degrees. */
  shares: Float64Array;
  /** Scatter of single turns, one an interval, as a share of the turn (divided by turns - 1). */
  scatter: Float64Array;
};

/** What was learnt, where it may be used. Issues: too-few (20 turns), not-stable (which tooth, and how far). */
export function learntPitch({ turns, mean, squares, nominal }: PitchLearner): Outcome<LearntPitch> {
  if (turns < leastTurns) return refused('too-few', `${turns} turns learnt, ${leastTurns} needed`);
  const n = nominal.length;
  const scatter = squares.map((sum) => Math.sqrt(sum / (turns - 1)));
  const pitch = Math.min(...nominal);
  const total = mean.reduce((sum, share) => sum + share, 0);
  const shares = mean.map((share) => share / total);
  for (let k = 0; k < n; k++) {
    if (!(scatter[k]! / pitch < mostScatter))
      return refused('not-stable', `interval ${k} scatters by ${scatter[k]! / pitch} of a pitch`);
    const off = shares[k]! / nominal[k]! - 1;
    const isGap = nominal[k]! > 1.5 * pitch;
    if (!isGap && !(Math.abs(off) < mostOff))
      return refused('not-stable', `interval ${k} is off by ${off} of a pitch`);
  }
  return got({ turns, shares, scatter });
}

/** Speed over one interval, rev/min, from its learnt share of the turn and its duration, s. Issues: bad-setting. */
export function rpmOfShare(share: number, intervalS: number): Outcome<number> {
  return (
    notPositive(share, 'share of the turn') ??
    notPositive(intervalS, 'interval') ??
    got((60 * share) / intervalS)
  );
}

/**
 * Instants with the wheel's pattern taken out: each tooth where it would have passed had it stood at its ideal place. What
 * jitter is then left is the motion's and the noise's.
 * @param first interval (index into `shares`) that begins with the first instant.
 * Issues: bad-setting, too-few, not-finite, not-ascending.
 */
export function withoutPitch(
  teethS: ArrayLike<number>,
  shares: ArrayLike<number>,
  nominal: ArrayLike<number>,
  first: number,
): Outcome<Float64Array> {
  const n = shares.length;
  const bad =
    notInstants(teethS, 2, 'tooth') ??
    notCount(n, 1, 'number of shares') ??
    notFinite(nominal, 'ideal share') ??
    notCount(first, 0, 'first interval');
  if (bad) return bad;
  if (nominal.length !== n || first >= n)
    return refused('bad-setting', `${n} shares, ${nominal.length} ideal ones, first interval ${first}`);
  for (let k = 0; k < n; k++) {
    const share = notPositive(shares[k]!, `share ${k}`);
    if (share) return share;
  }
  let ahead = 0;
  const out = Float64Array.from({ length: teethS.length }, (_, k) => {
    const after = Math.min(k, teethS.length - 2);
    const at = (first + after) % n;
    const turnS = (teethS[after + 1]! - teethS[after]!) / shares[at]!;
    const t = teethS[k]! - ahead * turnS;
    ahead += shares[(first + k) % n]! - nominal[(first + k) % n]!;
    return t;
  });
  return got(out);
}
