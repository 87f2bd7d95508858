/** One case: a sound rig, what goes wrong with it and when, and which finding must say so by when. */
import type { FindingCode } from '@/signal/model';
import type { Draw } from '@/tests/accuracy/findings/draw';
import type { MotionSpec } from '@/simulator/motion';
import type { Bench, Machine } from '@/tests/accuracy/findings/machine';
import { steadyMotion, swayingMotion } from '@/tests/accuracy/findings/motions';

/** Times in seconds of the stream. */
export type FaultCase = Bench & {
  /** Which kind of it, in a word or two. */
  variant: string;
  /** Length of the run. */
  seconds: number;
  beginS: number;
  /** From here on the fault is all there. */
  wholeS: number;
  /** Gone; Infinity: it stays. */
  endS: number;
  /** The finding must be open by so long after `wholeS`, and closed by so long after `endS`. */
  appearS: number;
  goneS: number;
  /** One sensor cannot tell what it is: that it says so is all that can be asked. */
  mayDoubt?: boolean;
  /** Another code under which the same thing may be said, where the data cannot tell one from the other. */
  orSaidAs?: FindingCode;
  /** Codes that may well come with it. */
  consequences: readonly FindingCode[];
};
export type CaseMaker = (draw: Draw) => FaultCase;

export type Timing = Pick<FaultCase, 'seconds' | 'beginS' | 'wholeS' | 'endS' | 'appearS' | 'goneS'>;

/**
 * A healthy stretch that is long enough to learn from, the fault, and the time after it. A finding is due within 2 s or
 * the turns that its rule needs, whichever is longer; ten percent and 0.3 s for the tooth and the tick that end them.
 */
export function timingFor(
  draw: Draw,
  turnsPerS: number,
  options: { needsTurns: number; needsS?: number; easeS?: number; leadTurns?: number },
): Timing {
  const { needsTurns, needsS = 2, easeS = 0, leadTurns = 15 } = options;
  const turnsS = (1.1 * needsTurns) / turnsPerS + 0.3;
  const appearS = Math.max(needsS, turnsS);
  const beginS = Math.max(6, leadTurns / turnsPerS) + draw.uniform(0, 2);
  const wholeS = beginS + easeS;
  const endS = wholeS + appearS + draw.uniform(2, 5) + easeS;
  const goneS = Math.max(6, 2 * turnsS + 2);
  return { beginS, wholeS, endS, appearS, goneS, seconds: endS + goneS + 0.5 };
}

/** For a fault that is there from the first sample to the last. */
export function timingOfStanding(turnsPerS: number, needsTurns: number): Timing {
  const appearS = Math.max(2, (1.1 * needsTurns) / turnsPerS + 0.3);
  // The band has to find itself first.
  const wholeS = Math.max(1, 2 / turnsPerS);
  return { beginS: 0, wholeS, endS: Infinity, appearS, goneS: 0, seconds: wholeS + appearS + 2 };
}

/** How much wider the gap must be for so large a share of the swing, mm. */
export function gapFor(machine: Machine, share: number): number {
  return (-Math.log(share) * machine.wheel.lengthMm) / (2 * Math.PI);
}

/** Running all the time, steadily or a little up and down. */
export function runningMotion(draw: Draw, machine: Machine, seconds: number): MotionSpec {
  return draw.chance(0.5)
    ? steadyMotion(draw, machine.rpm, seconds)
    : swayingMotion(draw, machine.rpm, seconds, draw.uniform(0.7, 0.9));
}
