/**
 * Finds the levels of a signal of which nothing is known yet, or whose known levels no longer fit: a zigzag of turning
 * points. A turning point counts once the signal has come back from it by `deltaV`, at least 14 noise sigmas (white noise
 * spans less than 13 even in 10^9 samples) and at least half the largest swing seen. Levels are taken as found once three
 * swings in a row are of one size (the smallest at least 0.6 of the largest). Nothing is decided from fewer.
 */
export type Hunter = {
  /** +1 looking for a peak, -1 for a trough, 0 for either. */
  heading: -1 | 0 | 1;
  highV: number;
  lowV: number;
  largestV: number;
  /** Swings are never judged against less than this, V: a share of the levels known before; 0 at the start. */
  leastV: number;
  /** Last turning points, newest last. */
  turns: Float64Array;
  turnCount: number;
  lastTurnAt: number;
  found: boolean;
  foundLowV: number;
  foundHighV: number;
};

const minSigmas = 14;
/** A swing below so many quanta may be one code toggling. */
const minQuanta = 4;
const alike = 0.6;
const leastShare = 1e-9;

export function createHunter(): Hunter {
  return {
    heading: 0,
    highV: -Infinity,
    lowV: Infinity,
    largestV: 0,
    leastV: 0,
    turns: new Float64Array(4),
    turnCount: 0,
    lastTurnAt: 0,
    found: false,
    foundLowV: 0,
    foundHighV: 0,
  };
}

/** @param leastV swings smaller than this are not taken for teeth. */
export function startHunt(hunter: Hunter, at: number, leastV: number): void {
  hunter.heading = 0;
  hunter.highV = -Infinity;
  hunter.lowV = Infinity;
  hunter.largestV = 2 * leastV;
  hunter.leastV = leastV;
  hunter.turnCount = 0;
  hunter.lastTurnAt = at;
  hunter.found = false;
}

/** Swings below this may be noise, V; infinite while the noise is not known (NaN). */
export function swingFloorV(hunter: Hunter, noiseV: number, quantumV: number): number {
  return Number.isNaN(noiseV) ? Infinity : Math.max(minSigmas * noiseV, minQuanta * quantumV, hunter.leastV);
}

/**
 * Takes `v[from..to]` (ends included; `v[j]` is sample `base + j` of the stream) until levels are found.
 * @param noiseV rms; NaN: not known, then nothing is decided.
 * @param patience samples without a turning point after which the largest swing seen is halved.
 * @returns index of the sample at which levels were found (`hunter.found`), else `to`.
 */
export function hunt(
  hunter: Hunter,
  v: Float64Array,
  from: number,
  to: number,
  base: number,
  noiseV: number,
  quantumV: number,
  patience: number,
): number {
  const floorV = Number.isNaN(noiseV)
    ? Infinity
    : Math.max(minSigmas * noiseV, minQuanta * quantumV, hunter.leastV);
  let deltaV = Math.max(floorV, hunter.largestV / 2);
  for (let j = from; j <= to; j++) {
    const x = v[j]!;
    if (x > hunter.highV) hunter.highV = x;
    if (x < hunter.lowV) hunter.lowV = x;
    // A computed or digital signal has no noise at all: equal samples, and the rounding of a filter, are no swing.
    if (
      deltaV === 0 &&
      hunter.highV - hunter.lowV <= leastShare * Math.max(Math.abs(hunter.highV), Math.abs(hunter.lowV))
    )
      continue;
    if (hunter.heading >= 0 && hunter.highV - x >= deltaV) {
      turn(hunter, hunter.highV, base + j);
      hunter.heading = -1;
      hunter.lowV = x;
      deltaV = Math.max(floorV, hunter.largestV / 2);
      if (settled(hunter)) return j;
    } else if (hunter.heading <= 0 && x - hunter.lowV >= deltaV) {
      turn(hunter, hunter.lowV, base + j);
      hunter.heading = 1;
      hunter.highV = x;
      deltaV = Math.max(floorV, hunter.largestV / 2);
      if (settled(hunter)) return j;
    } else if (base + j - hunter.lastTurnAt >= patience) {
      hunter.lastTurnAt = base + j;
      hunter.largestV = Math.max(hunter.largestV / 2, 2 * hunter.leastV);
      deltaV = Math.max(floorV, hunter.largestV / 2);
    }
  }
  return to;
}

function turn(hunter: Hunter, value: number, at: number): void {
  const { turns } = hunter;
  if (hunter.turnCount > 0) {
    const swing = Math.abs(value - turns[Math.min(hunter.turnCount, 4) - 1]!);
    if (swing > hunter.largestV) hunter.largestV = swing;
  }
  if (hunter.turnCount < 4) {
    turns[hunter.turnCount] = value;
  } else {
    turns.copyWithin(0, 1);
    turns[3] = value;
  }
  hunter.turnCount++;
  hunter.lastTurnAt = at;
}

function settled(hunter: Hunter): boolean {
  if (hunter.turnCount < 4) return false;
  const [a, b, c, d] = hunter.turns as unknown as [number, number, number, number];
  const first = Math.abs(a - b);
  const second = Math.abs(b - c);
  const third = Math.abs(c - d);
  if (Math.min(first, second, third) < alike * Math.max(first, second, third)) return false;
  hunter.found = true;
  // The outermost of each kind: the first turning point may be no more than where the hunt began.
  hunter.foundLowV = Math.min(a, b, c, d);
  hunter.foundHighV = Math.max(a, b, c, d);
  return true;
}
