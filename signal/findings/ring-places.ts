/**
 * Where the channels of a ring stand, judged from their phases: unevenly (phase error), or upside down (an inverted line).
 * Limits are ours: a pair is usable within 30 degrees of the quarter, three switches within 15 of their places. Of sound
 * ones two may stand 6 degrees off to either side and duties add 7 more, so that a state that is off by 19 proves nothing yet.
 * A state that is half as wide as it should be halves the speed up to which it is seen.
 */
import type { LanePhases } from '@/signal/findings/lane-phases';
import type { RuleContext } from '@/signal/findings/rule';
import type { Finding } from '@/signal/model';
import { wrapDeg } from '@/signal/statistics/sine-pair';

type Severity = Finding['severity'];
/** `lane`: the one that stands off. */
export type RingVerdict = { lane: number; severity: Severity; evidence: Record<string, number | string> };

/** Degrees of a cycle; what is open already stays until it is better by so much. */
const staysBy = 3;
const mostOffPair = 30;
const narrowPair = 45;
/** Of three: how far one stands from where the other two would have it, and how far a state may differ from 60 degrees. */
const mostOffTriple = 15;
/** A band that is fixed a twentieth of the swing beside the middle makes every second state 11 degrees wider, places add 9. */
const mostSpread = 24;
const narrowTriple = 30;

/** @param offDeg how far the means may be off. @param open severity of the finding that is open. */
export function judgePair(
  { riseDeg, duty }: LanePhases,
  widths: Float64Array,
  offDeg: number,
  open: Severity | null,
): RingVerdict | null {
  const phaseDeg = riseDeg[1]!;
  // The same in both directions: how much further than a quarter B stands behind A.
  const errorDeg = phaseDeg < 180 ? phaseDeg - 90 : 270 - phaseDeg;
  const narrowestDeg = Math.min(...widths);
  const isNarrow = narrowestDeg < narrowPair - offDeg + (open === 'fault' ? staysBy : 0);
  const isOff = Math.abs(errorDeg) > mostOffPair + offDeg - (open ? staysBy : 0);
  if (!isNarrow && !isOff) return null;
  return {
    lane: 1,
    severity: isNarrow ? 'fault' : 'warn',
    evidence: {
      phaseDeg,
      errorDeg,
      narrowestDeg,
      aHighPercent: 100 * duty[0]!,
      bHighPercent: 100 * duty[1]!,
    },
  };
}

export function judgeTriple(
  phases: LanePhases,
  widths: Float64Array,
  offDeg: number,
  open: Severity | null,
): RingVerdict | null {
  // A set with an inverted line passes states that never are, all of them 60 degrees wide: no matter of places.
  if (invertedOfThree(phases)) return null;
  let spreadDeg = 0;
  let narrowestDeg = 360;
  let widestDeg = 0;
  let narrowest = 1;
  for (let state = 1; state < 7; state++) {
    const width = widths[state]!;
    spreadDeg = Math.max(spreadDeg, Math.abs(width - 60));
    widestDeg = Math.max(widestDeg, width);
    if (width < narrowestDeg) {
      narrowestDeg = width;
      narrowest = state;
    }
  }
  const { lane, errorDeg } = farthestOff(phases);
  const isNarrow = narrowestDeg < narrowTriple - offDeg + (open === 'fault' ? staysBy : 0);
  const more = offDeg - (open ? staysBy : 0);
  if (!isNarrow && Math.abs(errorDeg) <= mostOffTriple + more && spreadDeg <= mostSpread + more) return null;
  return {
    lane,
    severity: isNarrow ? 'fault' : 'warn',
    evidence: {
      errorDeg,
      spreadDeg,
      narrowestDeg,
      widestDeg,
      narrowestCode: narrowest,
      highPercent: 100 * phases.duty[lane]!,
    },
  };
}

/** Middle of each lane's high part, against even thirds; of three, the one that is off is told by the other two. */
function farthestOff({ riseDeg, duty }: LanePhases): { lane: number; errorDeg: number } {
  const middles = riseDeg.map((rise, lane) => rise + 180 * (duty[lane]! - duty[0]!));
  const offs = (sense: 1 | -1) => middles.map((middle, lane) => wrapDeg(middle - sense * 120 * lane));
  const size = (list: number[]) => list.reduce((sum, off) => sum + Math.abs(off), 0);
  const forward = offs(1);
  const reverse = offs(-1);
  const list = size(forward) <= size(reverse) ? forward : reverse.map((off) => -off);
  const middle = list.toSorted((a, b) => a - b)[1]!;
  let lane = 0;
  list.forEach((off, k) => {
    if (Math.abs(off - middle) > Math.abs(list[lane]! - middle)) lane = k;
  });
  return { lane, errorDeg: wrapDeg(list[lane]! - middle) };
}

/** So far may each line of a set be off, and the pattern is still told. */
const patternWithin = 25;

/**
 * The line that makes three lines at 120 degrees look as they do, where it has to be turned round; null: none has to, or
 * the pattern is none of these. Two inverted lines look like the third one inverted.
 */
export function invertedOfThree({ riseDeg, duty }: LanePhases): { lane: number; sense: 1 | -1 } | null {
  for (const sense of [1, -1] as const) {
    for (let inverted = 0; inverted < 3; inverted++) {
      let fits = true;
      for (let lane = 0; lane < 3 && fits; lane++) {
        const turned = (lane === inverted ? 180 : 0) - (inverted === 0 ? 180 : 0);
        const middle = riseDeg[lane]! + 180 * (duty[lane]! - duty[0]!);
        fits = Math.abs(wrapDeg(middle - sense * 120 * lane - turned)) < patternWithin;
      }
      if (fits) return { lane: inverted, sense };
    }
  }
  return null;
}

/** A duty at least so far from one half tells high from low; unipolar switches are never at one half. */
const leastLean = 0.1;
const leastLeanOfSwitch = 0.04;

/**
 * Whether the duties of a pair are mirror images: one line is then upside down. The other one is known to be right only
 * where both sensors are unipolar switches, whose active part is always the shorter one.
 */
export function invertedOfPair(
  { duty, periodS }: LanePhases,
  { paths, lanes, rateHz }: Pick<RuleContext, 'paths' | 'lanes' | 'rateHz'>,
): { lane: number | null } | null {
  const sensors = lanes.map((index) => paths[index]!.channel.sensor);
  const areSwitches = sensors.every(({ kind }) => kind === 'switch');
  const leans = duty.map((share) => share - 0.5);
  const [a, b] = leans as [number, number];
  const least = Math.max(areSwitches ? leastLeanOfSwitch : leastLean, 1.5 / (periodS * rateHz));
  if (a * b > 0 || Math.min(Math.abs(a), Math.abs(b)) < least) return null;
  if (Math.abs(a + b) > 0.4 * Math.max(Math.abs(a), Math.abs(b))) return null;
  if (!areSwitches) return { lane: null };
  const contrary = sensors.map(({ activeLow }, lane) => leans[lane]! > 0 !== activeLow);
  return { lane: contrary[0] === contrary[1] ? null : contrary.indexOf(true) };
}
