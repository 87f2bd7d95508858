/** When a rule may judge: starts, stops, reversals and a filter that still rings are none of its business. */
import type { RuleContext } from '@/signal/findings/rule';
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

/** True where the shaft has turned undisturbed for so many teeth of the first channel, with the filter settled. */
export function isCalm({ motion, settleS }: RuleContext, nowS: number, teeth: number): boolean {
  const { calm, state } = motion;
  return state === 'running' && calm.teeth >= teeth && nowS - calm.sinceS >= settleS;
}

/**
 * By what share the speed changed from one stretch of `teeth` teeth to the next one, the last of the log.
 * @returns 0 for a steady shaft, 0.1 for one that is 10 % faster than before; NaN where the log does not reach so far.
 */
export function speedChange(log: ToothLog, teeth: number): number {
  const last = log.count - 1;
  const first = last - 2 * teeth;
  if (first < readableFrom(log, 0)) return NaN;
  const middle = log.riseS[(last - teeth) & log.mask]!;
  return (middle - log.riseS[first & log.mask]!) / (log.riseS[last & log.mask]! - middle) - 1;
}
