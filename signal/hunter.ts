/**
 * Finds the levels of a signal of which nothing is known yet, or whose known levels no longer fit: a zigzag of turning
 * points. A turning point counts once the signal has come back from it by 12 noise sigmas (white noise spans that once in
 * 10^8 samples, and it takes three such swings in a row) and by a fifth of the third largest swing seen, so that what is
 * small beside the teeth does not crowd them out.
 *
 * Levels are taken as found once three swings in a row are of one size (the smallest at least 0.6 of the largest), where
 * what is less than half the largest swing is no swing of its own; or once eight in a row are of one size, whatever was
 * seen before: a single spike, or a step, is then not what the teeth are measured by. Nothing is decided from fewer.
 */
import type { Levels } from '@/signal/levels';
import { leastQuanta, leastSigmas } from '@/signal/tooth-size';

export type Hunter = {
  /** +1 looking for a peak, -1 for a trough, 0 for either. */
  heading: -1 | 0 | 1;
  highV: number;
  lowV: number;
  /** What the signal must come back by, at least; V. */
  finestV: number;
  /** Swings are never judged against less than this, V: a share of the levels known before; 0 at the start. */
  leastV: number;
  /** Levels known before, V; NaN at the start. */
  knownLowV: number;
  knownHighV: number;
  /** The shaft may turn to and fro, and so may shake. */
  isRing: boolean;
  /** Turning points, oldest first. */
  readonly turns: Float64Array;
  turnCount: number;
  found: boolean;
  /** What was found lies on one side of the levels known before: more of it is wanted then. */
  aside: boolean;
  foundLowV: number;
  foundHighV: number;
};

const alike = 0.6;
const fewAlike = 3;
const manyAlike = 8;
const finestShare = 0.2;
/** Rounding of doubles, and of a filter's: no swing. */
const leastShare = 1e-9;
const most = 64;
/** What is less than this share of the levels known before, and no more than that outside of them. */
const farSmaller = 0.6;
const little = 0.25;
/** Swings of one size that it takes to believe in what lies aside; a shaft that may shake takes more. */
const manyOfRing = 24;
/** Shaking may cut one side short by little only, so that what is left still reaches beyond the middle. */
const smaller = 0.8;
const offMiddle = 0.1;
/** Its shorter teeth may have moved a level by then. */
const littleOfRing = 0.4;

const coarse = new Float64Array(most + 1);
const swings = new Float64Array(3);

export function createHunter(): Hunter {
  return {
    heading: 0,
    highV: -Infinity,
    lowV: Infinity,
    // Numbers begin as fractions: a field that was ever a whole number changes its layout later.
    finestV: NaN,
    leastV: NaN,
    knownLowV: NaN,
    knownHighV: NaN,
    isRing: false,
    turns: new Float64Array(most),
    turnCount: 0,
    found: false,
    aside: false,
    foundLowV: NaN,
    foundHighV: NaN,
  };
}

/**
 * @param leastV swings smaller than this are not taken for teeth.
 * @param known levels known before. @param isRing the shaft may turn to and fro.
 */
export function startHunt(hunter: Hunter, leastV: number, known: Levels, isRing: boolean): void {
  hunter.heading = 0;
  hunter.highV = -Infinity;
  hunter.lowV = Infinity;
  hunter.finestV = 0;
  hunter.leastV = leastV;
  hunter.knownLowV = known.lowV;
  hunter.knownHighV = known.highV;
  hunter.isRing = isRing;
  hunter.turnCount = 0;
  hunter.found = false;
}

/**
 * Swings below this may be noise, V; infinite while the noise is not known (NaN). What is rounded to quanta swings by one more.
 */
export function swingFloorV(hunter: Hunter, noiseV: number, quantumV: number): number {
  return Number.isNaN(noiseV)
    ? Infinity
    : Math.max(leastSigmas * noiseV + quantumV, leastQuanta * quantumV, hunter.leastV);
}

/**
 * Takes `v[from..to]` (ends included) until levels are found.
 * @param noiseV rms, what it may be at most; NaN: not known, then nothing is decided.
 * @returns index of the sample at which levels were found (`hunter.found`), else `to`.
 */
export function hunt(
  hunter: Hunter,
  v: Float64Array,
  from: number,
  to: number,
  noiseV: number,
  quantumV: number,
): number {
  const floorV = swingFloorV(hunter, noiseV, quantumV);
  let deltaV = Math.max(floorV, hunter.finestV);
  for (let j = from; j <= to; j++) {
    const x = v[j]!;
    if (x > hunter.highV) hunter.highV = x;
    if (x < hunter.lowV) hunter.lowV = x;
    const isPeak = hunter.heading >= 0 && hunter.highV - x >= deltaV;
    if (!isPeak && !(hunter.heading <= 0 && x - hunter.lowV >= deltaV)) continue;
    // A computed or digital signal has no noise at all, so that deltaV is 0.
    const backV = isPeak ? hunter.highV - x : x - hunter.lowV;
    if (backV <= leastShare * Math.max(Math.abs(hunter.highV), Math.abs(hunter.lowV))) continue;
    turn(hunter, isPeak ? hunter.highV : hunter.lowV);
    hunter.heading = isPeak ? -1 : 1;
    if (isPeak) hunter.lowV = x;
    else hunter.highV = x;
    deltaV = Math.max(floorV, hunter.finestV);
    if (settled(hunter)) return j;
  }
  return to;
}

function turn(hunter: Hunter, value: number): void {
  const { turns } = hunter;
  if (hunter.turnCount === most) dropSmallest(hunter);
  turns[hunter.turnCount++] = value;
  // The third largest swing: one spike makes two.
  swings.fill(0);
  for (let i = 1; i < hunter.turnCount; i++) {
    const swing = Math.abs(turns[i]! - turns[i - 1]!);
    if (swing > swings[0]!) {
      swings[2] = swings[1]!;
      swings[1] = swings[0]!;
      swings[0] = swing;
    } else if (swing > swings[1]!) {
      swings[2] = swings[1]!;
      swings[1] = swing;
    } else if (swing > swings[2]!) {
      swings[2] = swing;
    }
  }
  hunter.finestV = finestShare * swings[2]!;
}

/** The pair of turning points that differ least goes; where it is the first or the last one, only that. */
function dropSmallest(hunter: Hunter): void {
  const { turns, turnCount } = hunter;
  let at = 1;
  for (let i = 2; i < turnCount; i++)
    if (Math.abs(turns[i]! - turns[i - 1]!) < Math.abs(turns[at]! - turns[at - 1]!)) at = i;
  const from = at === 1 ? 0 : at - 1;
  const count = at === 1 || at === turnCount - 1 ? 1 : 2;
  turns.copyWithin(from, from + count, turnCount);
  hunter.turnCount -= count;
}

function settled(hunter: Hunter): boolean {
  const { turns, turnCount } = hunter;
  const count = coarsen(hunter, swings[0]! / 2);
  if (areAlike(coarse, count, fewAlike)) take(hunter, coarse, count, fewAlike);
  else if (areAlike(turns, turnCount, manyAlike)) take(hunter, turns, turnCount, manyAlike);
  else return false;
  hunter.aside = isAside(hunter);
  hunter.found = !hunter.aside || areAlike(turns, turnCount, hunter.isRing ? manyOfRing : manyAlike);
  return hunter.found;
}

/**
 * What was found is far smaller than the levels known before, within them, and clear of their middle: a shaft that shakes,
 * with a tooth's top or a gap's bottom before the sensor, does that. Where it may shake on its way it need not be clear of it.
 */
function isAside({ foundLowV, foundHighV, knownLowV, knownHighV, isRing }: Hunter): boolean {
  const knownV = knownHighV - knownLowV;
  const middleV = (knownLowV + knownHighV) / 2;
  const outsideV = Math.max(knownLowV - foundLowV, foundHighV - knownHighV);
  const offV = Math.abs((foundLowV + foundHighV) / 2 - middleV);
  return (
    foundHighV - foundLowV < (isRing ? smaller : farSmaller) * knownV &&
    outsideV < (isRing ? littleOfRing : little) * knownV &&
    (isRing ? offV > offMiddle * knownV : foundLowV > middleV || foundHighV < middleV)
  );
}

/** Turning points of which each differs by `leastV` from the next, in `coarse`; @returns how many. */
function coarsen({ turns, turnCount }: Hunter, leastV: number): number {
  let count = 0;
  let heading = 0;
  coarse[0] = turns[0]!;
  for (let i = 1; i < turnCount; i++) {
    const step = turns[i]! - coarse[count]!;
    if (heading * step > 0 || (heading === 0 && count === 0 && Math.abs(step) < leastV)) {
      // Further on the same way; or nothing far enough from where the hunt began yet.
      if (heading !== 0) coarse[count] = turns[i]!;
    } else if (Math.abs(step) >= leastV) {
      heading = Math.sign(step);
      coarse[++count] = turns[i]!;
    }
  }
  return count + 1;
}

function areAlike(points: Float64Array, count: number, swingCount: number): boolean {
  if (count <= swingCount) return false;
  let least = Infinity;
  let largest = 0;
  for (let i = count - swingCount; i < count; i++) {
    const swing = Math.abs(points[i]! - points[i - 1]!);
    if (swing < least) least = swing;
    if (swing > largest) largest = swing;
  }
  return least >= alike * largest;
}

/** The outermost of the last four turning points: the first of all may be no more than where the hunt began. */
function take(hunter: Hunter, points: Float64Array, count: number, swingCount: number): void {
  hunter.foundLowV = Infinity;
  hunter.foundHighV = -Infinity;
  for (let i = count - swingCount - 1; i < count; i++) {
    hunter.foundLowV = Math.min(hunter.foundLowV, points[i]!);
    hunter.foundHighV = Math.max(hunter.foundHighV, points[i]!);
  }
}
