/** Draws of one case, all from its seed: the same seed gives the same rig, run and fault. */
import { hash32, uniformAt } from '@/simulator/random';

export type Draw = {
  uniform(low: number, high: number): number;
  /** Even on a logarithmic scale: as many between 1 and 10 as between 10 and 100. */
  log(low: number, high: number): number;
  /** Both ends included. */
  integer(low: number, high: number): number;
  pick<T>(list: readonly T[]): T;
  chance(share: number): boolean;
  sign(): 1 | -1;
  seed(): number;
};

export function createDraw(seed: number): Draw {
  let at = 0;
  const next = () => uniformAt(seed, (at += 1));
  const draw: Draw = {
    uniform: (low, high) => low + (high - low) * next(),
    log: (low, high) => low * (high / low) ** next(),
    integer: (low, high) => Math.floor(low + (high + 1 - low) * next()),
    pick: (list) => list[Math.floor(list.length * next())] as (typeof list)[number],
    chance: (share) => next() < share,
    sign: () => (next() < 0.5 ? 1 : -1),
    seed: () => hash32(seed, (at += 1)) & 0x7fffffff,
  };
  return draw;
}
