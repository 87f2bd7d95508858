import { ClippingRule } from '@/signal/findings/clipping';
import { DutyShiftRule } from '@/signal/findings/duty-shift';
import { MainsHumRule } from '@/signal/findings/mains-hum';
import { OffsetDriftRule } from '@/signal/findings/offset-drift';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { SlowEdgeRule } from '@/signal/findings/slow-edge';
import { SlowSpectra } from '@/signal/findings/slow-spectrum';
import { SupplyRippleRule } from '@/signal/findings/supply-ripple';
import { TurnMeans } from '@/signal/findings/turn-means';
import type { UnseenTeeth } from '@/signal/findings/unseen-teeth';
import { WeakSwingRule } from '@/signal/findings/weak-swing';

/** Rules about the signal of one channel. What teeth are like on average, and spectra, are made once for all of them. */
export function channelRules(context: RuleContext, unseen: UnseenTeeth): FindingRule[] {
  const means = context.paths.map((path) => new TurnMeans(context, path));
  const spectra = new SlowSpectra(context);
  const ripple = new SupplyRippleRule(context, spectra);
  return [
    new WeakSwingRule(context, means, spectra, unseen),
    new ClippingRule(context),
    new OffsetDriftRule(context, means),
    ripple,
    new MainsHumRule(context, spectra, ripple.judges),
    new SlowEdgeRule(context, means),
    new DutyShiftRule(context, means),
  ];
}
