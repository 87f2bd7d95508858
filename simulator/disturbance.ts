/** What comes and goes at random instants, a given number of times a second: one event in each slot of that length. */
import { uniformAt } from '@/simulator/random';

/** True while an event that lasts `forS` is on at `tS`. */
export function isWithinEvent(tS: number, perS: number, forS: number, seed: number): boolean {
  const slot = Math.floor(tS * perS);
  const room = Math.max(0, 1 - forS * perS);
  const into = tS - (slot + room * uniformAt(seed, Math.abs(slot))) / perS;
  return into >= 0 && into < forS;
}
