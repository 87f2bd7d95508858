/** The rules of teeth and wheel. They share what each channel sees of the wheel. */
import { ExtraPulseRule } from '@/signal/findings/extra-pulse';
import { MissingToothRule } from '@/signal/findings/missing-tooth';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { RunOutRule } from '@/signal/findings/run-out';
import { UnevenTeethRule } from '@/signal/findings/uneven-teeth';
import { WheelLanes } from '@/signal/findings/wheel-lanes';
import { WrongCountRule } from '@/signal/findings/wrong-count';

export function wheelRules(context: RuleContext): FindingRule[] {
  const wheels = new WheelLanes(context);
  return [
    wheels,
    new MissingToothRule(context, wheels),
    new ExtraPulseRule(wheels),
    new UnevenTeethRule(context),
    new RunOutRule(context),
    new WrongCountRule(context, wheels),
  ];
}
