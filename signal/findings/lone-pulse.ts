/** Whether one pulse alone proves that it is no tooth. */
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

/** The pitches before, over and after the pulse agree within this ratio: no shaft that starts or stops comes near it. */
const alikeWithin = 1.15;

/**
 * The pulse at `t`, s, is in the log of its channel between two others that are one pitch apart, as the pitches on both
 * sides tell. False where that cannot be read any more.
 */
export function isBetweenTeeth(log: ToothLog, t: number): boolean {
  const { riseS, mask, count } = log;
  const oldest = readableFrom(log, 0);
  let n = count - 1;
  while (n > oldest && riseS[n & mask]! > t + 1e-9) n--;
  if (n - 2 < oldest || n + 2 >= count || Math.abs(riseS[n & mask]! - t) > 1e-9) return false;
  const fromS = riseS[(n - 1) & mask]!;
  const toS = riseS[(n + 1) & mask]!;
  const before = fromS - riseS[(n - 2) & mask]!;
  const after = riseS[(n + 2) & mask]! - toS;
  return isAlike(before, toS - fromS) && isAlike(toS - fromS, after);
}

function isAlike(a: number, b: number): boolean {
  return a < alikeWithin * b && b < alikeWithin * a;
}
