/** Randomness of a run: one number at the top, a seed of its own for each label below it. */
import { createHash } from 'node:crypto';
import { uniformAt } from '@/simulator/random';

/** A seed that depends on the run's seed and on what it is for, 0 to 2^31 - 1. */
export function seedFor(runSeed: number, section: string, label: string): number {
  const digest = createHash('sha256').update(`${runSeed}\n${section}\n${label}`).digest();
  return digest.readUInt32BE(0) >>> 1;
}

/** Uniform draws between two ends, one after the other, that follow from a seed. */
export function drawsOf(seed: number): (from: number, to: number) => number {
  let index = 0;
  return (from, to) => {
    index += 1;
    return from + (to - from) * uniformAt(seed ^ 0x3c6ef372, index);
  };
}
