/** What a channel swings and its band makes nothing of, as a sight of a weak swing: noise hides it, or the filter takes it. */
import { filterName } from '@/signal/findings/filtered-away';
import type { RuleContext } from '@/signal/findings/rule';
import type { SwingSight } from '@/signal/findings/swing-sights';
import type { UnseenTeeth } from '@/signal/findings/unseen-teeth';
import type { Unseen } from '@/signal/findings/unseen-lane';
import { leastSigmas } from '@/signal/tooth-size';

/** Worse than anything that is said of teeth which are counted. */
const size = 1000;
/** A low pass that lets the teeth through, over their frequency. */
const passing = 2;
/** What of white noise a steep low pass lets through: half the rate would be all of it. */
const half = 0.5;
const fewestSamples = 10;

export type UnseenSight = SwingSight & { sure: boolean };

/** @returns null where nothing of that kind is there now. */
export function unseenSwing(context: RuleContext, unseen: UnseenTeeth, index: number): UnseenSight | null {
  const seen = unseen.of(index);
  if (!seen || seen.why === 'fast') return null;
  const { swingV, noiseV, hz, fromS } = seen;
  if (seen.why === 'noise') {
    const evidence = {
      against: 'hidden',
      swingV,
      noiseV,
      swingSigmas: swingV / noiseV,
      ...(hz > 0 && { toneHz: hz, ...helpingCutoff(seen, context.rateHz) }),
    };
    return { size, severity: 'fault', atS: fromS, evidence, sure: false };
  }
  const { leftV, counts } = seen;
  const evidence = {
    against: 'filter',
    filter: filterName(context.settings, hz, context.rateHz),
    rawSwingV: swingV,
    leftV,
    leftPercent: (100 * leftV) / swingV,
    ...(hz > 0 && { toneHz: hz }),
    counted: counts ? 'yes' : 'no',
  };
  return { size, severity: counts ? 'warn' : 'fault', atS: fromS, evidence, sure: hz > 0 };
}

/** Of a low pass that would bring the swing above the noise, where there is one. */
function helpingCutoff({ swingV, noiseV, hz }: Unseen, rateHz: number): { helpingCutoffHz?: number } {
  const cutoffHz = passing * hz;
  const noiseThenV = noiseV * Math.sqrt(cutoffHz / (half * rateHz));
  return rateHz > fewestSamples * cutoffHz && swingV > leastSigmas * noiseThenV
    ? { helpingCutoffHz: cutoffHz }
    : {};
}
