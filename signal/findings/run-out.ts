import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { meanOf, ofTeethThere, rangeOf, WheelLook } from '@/signal/findings/wheel-look';
import { wordsFor } from '@/signal/finding-words';
import type { Finding } from '@/signal/model';
import { recentWorth } from '@/signal/wheel-spacing';
import type { WheelFaceMeter } from '@/signal/wheel-face-meter';
import { WheelOrders } from '@/signal/wheel-orders';

const turnsNeeded = 5;
/**
 * Of four teeth one weak one is as much a wave over the turn as an eccentric wheel is: with eight it makes less than a third
 * of one.
 */
const fewestTeeth = 8;
/** Amplitude of order 1, as a share of the swing; open findings stay down to four fifths. */
const swingShare = 0.15;
const swingFault = 0.35;
/** And of the pitch: sound wheels of eight to thirteen teeth on sound drives come near 1 %. */
const pitchShare = 0.012;
const stays = 0.8;
/** Order 1 must be so large a share of all that differs from tooth to tooth. */
const waveShare = 0.5;
const significant = 4;
/** So many times what teeth that stand off at random would make. */
const aboveRoughness = 3.5;
/**
 * While all teeth grow or shrink together, those that have passed since stand apart from those that have not, like a wave of
 * at most twice what the mean has changed by: the wheel is judged by what stands clear of that. Run-out that comes up leaves
 * the mean as it was.
 */
const aboveChange = 2.5;

type Verdict = Pick<Finding, 'severity' | 'outcome' | 'at' | 'evidence'>;

/**
 * The wheel runs out of true: once a turn the gap, and so the swing, goes up and down. A spacing that does so may be the
 * wheel's too, or the shaft's speed that really sways once a turn: one sensor cannot tell the two apart.
 */
export class RunOutRule implements FindingRule {
  readonly latches = [new FindingLatch(2)];
  private readonly context: RuleContext;
  private readonly look: WheelLook;
  private readonly waves: WheelOrders | null = null;
  private readonly scratch: Float64Array | null = null;
  private verdict: Verdict | null = null;
  /** Mean swing at the last look, V. */
  private meanBeforeV = NaN;

  constructor(context: RuleContext) {
    this.context = context;
    this.look = new WheelLook(context);
    const { face } = this.look;
    if (!face || face.positions - face.missing < fewestTeeth) return;
    this.waves = new WheelOrders(face.positions, 2);
    this.scratch = new Float64Array(face.positions);
  }

  tick(nowS: number): void {
    const latch = this.latches[0]!;
    const { face, isKnown } = this.look;
    if (!face || !isKnown) this.verdict = null;
    else if (this.look.isDue(nowS)) this.verdict = this.judge(face, latch.open);
    const { verdict } = this;
    if (verdict) {
      const { name } = this.context.paths[this.context.primary]!.channel;
      const from = Math.max(0, nowS - turnsNeeded * this.look.turnS);
      latch.raise(
        {
          code: 'run-out',
          channel: name,
          from,
          ...verdict,
          ...wordsFor('run-out', name, { ...verdict.evidence, outcome: verdict.outcome }),
          causedBy: null,
        },
        nowS,
      );
    }
    latch.rest(nowS);
  }

  private judge(face: WheelFaceMeter, open: Finding | null): Verdict | null {
    const { waves, scratch } = this;
    if (!waves || !scratch) return null;
    const meanV = meanOf(face.swingV);
    const changeV = Math.abs(meanV - this.meanBeforeV);
    this.meanBeforeV = meanV;
    const { positions } = face;
    if (face.turns < turnsNeeded || !mayWave(face)) return null;
    waves.fit(ofTeethThere(face.swingV, face, scratch), 2);
    const swing = waveOf(waves, meanOf(face.swingVariance) / recentWorth);
    swing.isClear &&= swing.amplitude > aboveChange * changeV;
    const strongest = strongestOf(face);
    let spacing = { amplitude: NaN, second: NaN, isClear: false };
    if (face.spacing.turns >= turnsNeeded) {
      waves.fit(ofTeethThere(face.spacing.recentStep, face, scratch), 2);
      spacing = waveOf(waves, meanOf(face.spacing.stepVariance) / recentWorth);
      const random =
        Math.sqrt(waves.leftVariance) * 2 * Math.sin(Math.PI / positions) * Math.sqrt(1 / positions);
      spacing.isClear &&= spacing.amplitude > aboveRoughness * random;
    }
    const evidence: Finding['evidence'] = {
      swingPercent: 100 * (swing.amplitude / swing.mean),
      swingSecondPercent: 100 * (swing.second / swing.mean),
      ...(!Number.isNaN(spacing.amplitude) && {
        spacingPercent: 100 * spacing.amplitude,
        spacingSecondPercent: 100 * spacing.second,
        // Steps that sway by m of a pitch add up to m / (2 sin(pi / N)) of one.
        spacingDeg: (180 * spacing.amplitude) / (positions * Math.sin(Math.PI / positions)),
      }),
      positions,
      turns: face.turns,
    };
    const at = face.seenS[strongest]!;
    const swingLimit = swingShare * (open?.outcome === 'found' ? stays : 1);
    const share = swing.amplitude / swing.mean;
    if (swing.isClear && share > swingLimit)
      return { severity: share > swingFault ? 'fault' : 'warn', outcome: 'found', at, evidence };
    // What was found does not turn into a doubt while it fades.
    if (open?.outcome === 'found') return null;
    const pitchLimit = pitchShare * (open ? stays : 1);
    if (spacing.isClear && spacing.amplitude > pitchLimit)
      return { severity: 'note', outcome: 'cannot-tell', at, evidence };
    return null;
  }
}

/** An order's amplitude is at most 4 / pi of half of what lies between the least and the most (a square wave). */
function mayWave(face: WheelFaceMeter): boolean {
  const swing = rangeOf(face.swingV);
  const step = rangeOf(face.spacing.recentStep);
  const most = 2 / Math.PI;
  return (
    most * (swing.most - swing.least) > stays * swingShare * swing.least ||
    most * (step.most - step.least) > stays * pitchShare
  );
}

/** @param errorVariance of the mean at one tooth. */
function waveOf(
  waves: WheelOrders,
  errorVariance: number,
): { amplitude: number; second: number; mean: number; isClear: boolean } {
  const amplitude = waves.amplitude(1);
  const error = Math.sqrt((2 * errorVariance) / waves.count);
  const isWave = amplitude * amplitude > 2 * waveShare * waves.variance;
  const isClear = waves.count >= fewestTeeth && isWave && amplitude > significant * error;
  return { amplitude, second: waves.amplitude(2), mean: waves.mean, isClear };
}

function strongestOf({ swingV }: WheelFaceMeter): number {
  let best = 0;
  for (let k = 1; k < swingV.length; k++)
    if (swingV[k]! > swingV[best]! || Number.isNaN(swingV[best]!)) best = k;
  return best;
}
