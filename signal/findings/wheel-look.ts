/** When a rule looks at the wheel's face anew: a turn has passed, and the last look is a second ago or more. */
import type { RuleContext } from '@/signal/findings/rule';
import type { WheelFaceMeter } from '@/signal/wheel-face-meter';

const shortestS = 1;
/** Wheels with more positions are looked at every two seconds: a look at 4096 of them takes about half a millisecond. */
const manyPositions = 512;
const longS = 2;

export class WheelLook {
  readonly face: WheelFaceMeter | null;
  private readonly context: RuleContext;
  private lookedS = -Infinity;
  private turns = -1;

  constructor(context: RuleContext) {
    this.context = context;
    this.face = context.motion.train.face;
  }

  /** What was learnt of the wheel is of the teeth that come now. */
  get isKnown(): boolean {
    return this.face !== null && this.face.isKnown;
  }

  /** Time for one turn, s. */
  get turnS(): number {
    const { tracker } = this.context.motion.train.placer;
    return tracker.positions * tracker.pitchS;
  }

  isDue(nowS: number): boolean {
    const { face, turns, lookedS } = this;
    if (!face || face.turns === turns) return false;
    if (nowS - lookedS < (face.positions > manyPositions ? longS : shortestS)) return false;
    this.turns = face.turns;
    this.lookedS = nowS;
    return true;
  }
}

/** Values of the places whose tooth has not just failed: what a missing one showed last says nothing. */
export function ofTeethThere(values: Float64Array, face: WheelFaceMeter, to: Float64Array): Float64Array {
  const { inRow } = face.absence;
  for (let k = 0; k < to.length; k++) to[k] = inRow[k]! > 0 ? NaN : values[k]!;
  return to;
}

/**
 * How far apart known values lie, least to most: a look that costs next to nothing, before one that costs more.
 * @returns 0 and 0 where nothing is known.
 */
export function rangeOf(values: Float64Array): { least: number; most: number } {
  let least = Infinity;
  let most = -Infinity;
  for (let k = 0; k < values.length; k++) {
    const value = values[k]!;
    if (value < least) least = value;
    if (value > most) most = value;
  }
  return least <= most ? { least, most } : { least: 0, most: 0 };
}

/** Of the known ones; NaN where there is none. */
export function meanOf(values: Float64Array): number {
  let sum = 0;
  let count = 0;
  for (let k = 0; k < values.length; k++) {
    const value = values[k]!;
    if (Number.isNaN(value)) continue;
    sum += value;
    count++;
  }
  return sum / count;
}

/** What the numbers of teeth count from. */
export type Numbering = 'from the gap' | 'from the index' | 'relative';

export function numberingOf(face: WheelFaceMeter): Numbering {
  if (!face.isNumbered) return 'relative';
  return face.missing > 0 ? 'from the gap' : 'from the index';
}
