/**
 * How the channels of a ring of states stand to each other, from the logs of their teeth: how far each one rises behind
 * the first, and for how much of the cycle it is high. All state widths follow from these.
 *
 * Each cycle of the first channel is measured in itself, so that the speed may change; means are circular (K. V. Mardia,
 * Statistics of Directional Data, 1972). A stretch with a start, a stop, a reversal or bounce in it gives nothing.
 */
import type { RuleContext } from '@/signal/findings/rule';
import type { Wheel } from '@/signal/model';
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

export type LanePhases = {
  /** Cycles that were measured. */
  cycles: number;
  fromS: number;
  toS: number;
  /** Mean cycle of the first channel, s. */
  periodS: number;
  /** Rise behind that of the first channel, 0 to below 360 degrees of a cycle; one a lane, the first 0. */
  riseDeg: number[];
  /** High share of the cycle, 0..1; one a lane. */
  duty: number[];
  /** Largest circular standard deviation of a lane's single rises, degrees. */
  scatterDeg: number;
};

/** Of longer stretches only so many cycles are looked at, evenly spread. */
const mostCycles = 256;
/** An interval that differs by more than this ratio from its neighbour is not of a steady shaft. */
const alike = 1.25;
const nearlyRest = 1.9;
/** So large a share of the cycles has to be sound. */
const soundShare = 0.8;
const fewestCycles = 6;
/** Mean resultant length below which two channels are not locked to each other. */
const leastResultant = 0.7;

/** Whole turns of the wheel with at least 8 cycles, as cycles. */
export function wholeTurns({ pulsesPerTurn, missingPulses }: Wheel): number {
  const cycles = pulsesPerTurn - missingPulses;
  return cycles * Math.ceil(8 / cycles);
}

/**
 * The last `cycles` whole cycles, where they began after `sinceS`.
 * @returns null where the logs do not hold so many, or where the channels' edges do not go together.
 */
export function lanePhases(
  { paths, lanes, rig }: Pick<RuleContext, 'paths' | 'lanes' | 'rig'>,
  cycles: number,
  sinceS: number,
): LanePhases | null {
  const first = paths[lanes[0]!]!.log;
  const wanted = Math.min(cycles, first.length - 4);
  const last = first.count - 2;
  const begin = last - wanted;
  // The interval before the first cycle is looked at too.
  if (begin - 1 < readableFrom(first, 0)) return null;
  const fromS = first.riseS[begin & first.mask]!;
  const toS = first.riseS[last & first.mask]!;
  if (!(fromS >= sinceS) || restsBetween(first, begin - 1, last, rig.wheel.missingPulses + 1)) return null;
  const result: LanePhases = {
    cycles: 0,
    fromS,
    toS,
    periodS: (toS - fromS) / wanted,
    riseDeg: [],
    duty: [],
    scatterDeg: 0,
  };
  const stride = Math.ceil(wanted / mostCycles);
  for (let lane = 0; lane < lanes.length; lane++) {
    const log = paths[lanes[lane]!]!.log;
    if (!measureLane(result, first, log, begin, last, stride)) return null;
  }
  return result;
}

function measureLane(
  result: LanePhases,
  first: ToothLog,
  log: ToothLog,
  begin: number,
  last: number,
  stride: number,
): boolean {
  const oldest = readableFrom(log, 0) + 1;
  const newest = log.count - 2;
  let tooth = toothBefore(log, first.riseS[begin & first.mask]!);
  let asked = 0;
  let sound = 0;
  let cos = 0;
  let sin = 0;
  let high = 0;
  for (let k = begin; k < last; k += stride) {
    asked++;
    const fromS = first.riseS[k & first.mask]!;
    const toS = first.riseS[(k + 1) & first.mask]!;
    const periodS = toS - fromS;
    const beforeS = fromS - first.riseS[(k - 1) & first.mask]!;
    const afterS = first.riseS[(k + 2) & first.mask]! - toS;
    while (tooth <= newest && log.riseS[tooth & log.mask]! < fromS) tooth++;
    if (tooth < oldest || tooth > newest) continue;
    const riseS = log.riseS[tooth & log.mask]!;
    const ownS = riseS - log.riseS[(tooth - 1) & log.mask]!;
    if (!areAlike(periodS, beforeS) || !areAlike(ownS, periodS)) continue;
    // Where the speed changes evenly, the angle lags behind the time: x - c x (1 - x) / 2 for a change of c a cycle.
    const bend = (beforeS - afterS) / (4 * periodS);
    const rise = (riseS - fromS) / periodS;
    const fall = (log.fallS[tooth & log.mask]! - fromS) / periodS;
    const riseAngle = rise - bend * rise * (1 - rise);
    const duty = fall - bend * fall * (1 - fall) - riseAngle;
    if (!(duty > 0 && duty < 1)) continue;
    const angle = 2 * Math.PI * riseAngle;
    cos += Math.cos(angle);
    sin += Math.sin(angle);
    high += duty;
    sound++;
  }
  if (sound < Math.min(fewestCycles, asked) || sound < soundShare * asked) return false;
  const resultant = Math.min(1, Math.hypot(cos, sin) / sound);
  if (resultant < leastResultant) return false;
  const deg = (Math.atan2(sin, cos) * 180) / Math.PI;
  result.cycles = result.riseDeg.length === 0 ? sound : Math.min(result.cycles, sound);
  result.riseDeg.push((deg + 360) % 360);
  result.duty.push(high / sound);
  result.scatterDeg = Math.max(
    result.scatterDeg,
    (Math.sqrt(Math.max(0, -2 * Math.log(resultant))) * 180) / Math.PI,
  );
  return true;
}

/**
 * True where an interval is so much longer or shorter than the next one as a shaft makes that stops, or turns back.
 * @param gap positions from one side of the wheel's own gap to the other; 1: it has none.
 */
function restsBetween({ riseS, mask }: ToothLog, begin: number, last: number, gap: number): boolean {
  let beforeS = riseS[(begin + 1) & mask]! - riseS[begin & mask]!;
  for (let k = begin + 1; k < last; k++) {
    let ownS = riseS[(k + 1) & mask]! - riseS[k & mask]!;
    if (gap > 1 && ownS > Math.sqrt(gap) * beforeS) ownS /= gap;
    if (!(ownS < nearlyRest * beforeS && beforeS < nearlyRest * ownS)) return true;
    beforeS = ownS;
  }
  return false;
}

/** The last tooth that rose before `t`, by halving. */
function toothBefore(log: ToothLog, t: number): number {
  let low = readableFrom(log, 0);
  let high = log.count;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (log.riseS[middle & log.mask]! < t) low = middle + 1;
    else high = middle;
  }
  return low - 1;
}

function areAlike(a: number, b: number): boolean {
  return a > 0 && b > 0 && a < alike * b && b < alike * a;
}

/**
 * Widths of the states of a ring, degrees of a cycle, sum 360.
 * @param weights of each lane in the state, as in the step table. @returns one number a state, at its code.
 */
export function ringWidths({ riseDeg, duty }: LanePhases, weights: readonly number[]): Float64Array {
  const widths = new Float64Array(1 << weights.length);
  const marks = [0, 360];
  riseDeg.forEach((rise, lane) => marks.push(rise, (rise + 360 * duty[lane]!) % 360));
  marks.sort((a, b) => a - b);
  for (let k = 0; k + 1 < marks.length; k++) {
    const width = marks[k + 1]! - marks[k]!;
    const middle = marks[k]! + width / 2;
    let state = 0;
    riseDeg.forEach((rise, lane) => {
      if ((middle - rise + 720) % 360 < 360 * duty[lane]!) state += weights[lane]!;
    });
    widths[state] = widths[state]! + width;
  }
  return widths;
}

/**
 * How far a mean of these may be off, degrees. Where flanks pass between two samples, instants are no better than the
 * grid; that averages out only while the shaft does not turn in step with it.
 */
export function resolutionDeg(phases: LanePhases, context: RuleContext): number {
  const { periodS, scatterDeg, cycles } = phases;
  if (!isSteep(context)) return (2 * scatterDeg) / Math.sqrt(cycles);
  const sampleDeg = 360 / (periodS * context.rateHz);
  return scatterDeg < sampleDeg / 4 ? sampleDeg : (2 * sampleDeg) / Math.sqrt(cycles);
}

function isSteep({ paths, lanes, rateHz }: RuleContext): boolean {
  const path = paths[lanes[0]!]!;
  const { log, levels, operateV, releaseV } = path;
  const half = (operateV - releaseV) / 2 / (levels.highV - levels.lowV);
  let sum = 0;
  let seen = 0;
  for (let k = readableFrom(log, log.count - 16); k < log.count; k++, seen++) {
    sum += log.riseWayS[k & log.mask]!;
  }
  return seen > 0 && (sum / seen) * rateHz < 1.5 * half;
}
