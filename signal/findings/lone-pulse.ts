/** Whether one pulse alone proves that it is no tooth. */
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

/** Pitches on both sides that must be as long as the one with the pulse in it: a gap beside a change of speed looks like one. */
const beside = 2;
/** The pitches agree within this ratio: no shaft that starts or stops comes near it. */
const alikeWithin = 1.15;

/**
 * The pulse at `t`, s, is in the log of its channel between two others that are one pitch apart, as the pitches on both
 * sides tell. False where that cannot be read, or not yet.
 */
export function isBetweenTeeth(log: ToothLog, t: number): boolean {
  const { riseS, mask, count } = log;
  const oldest = readableFrom(log, 0);
  let n = count - 1;
  while (n > oldest && riseS[n & mask]! > t + 1e-9) n--;
  if (n - 1 - beside < oldest || n + 1 + beside >= count) return false;
  if (Math.abs(riseS[n & mask]! - t) > 1e-9) return false;
  const pitchS = riseS[(n + 1) & mask]! - riseS[(n - 1) & mask]!;
  for (let k = 1; k <= beside; k++) {
    const before = riseS[(n - k) & mask]! - riseS[(n - k - 1) & mask]!;
    const after = riseS[(n + k + 1) & mask]! - riseS[(n + k) & mask]!;
    if (!isAlike(before, pitchS) || !isAlike(pitchS, after)) return false;
  }
  return true;
}

function isAlike(a: number, b: number): boolean {
  return a < alikeWithin * b && b < alikeWithin * a;
}
