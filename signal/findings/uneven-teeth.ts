import { FallingFlanks } from '@/signal/findings/falling-flanks';
import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { meanOf, numberingOf, ofTeethThere, rangeOf, WheelLook } from '@/signal/findings/wheel-look';
import { wordsFor } from '@/signal/finding-words';
import type { Finding } from '@/signal/model';
import { memoryWorth } from '@/signal/wheel-spacing';
import type { WheelSpacing } from '@/signal/wheel-spacing';
import type { WheelFaceMeter } from '@/signal/wheel-face-meter';
import { middleMagnitude, WheelOrders } from '@/signal/wheel-orders';
import { displaced, patternOf, roughness, slowWave } from '@/signal/wheel-unevenness';

const turnsNeeded = 10;
/** Share of the pitch by which a tooth's distance to its neighbour is off; open findings stay down to four fifths. */
const offShare = 0.06;
const faultShare = 0.15;
/** Share of the swing by which a tooth is weaker or stronger than the others. */
const swingShare = 0.4;
const steadySwing = 0.1;
/** While the mean swing changes by more from look to look, teeth that have passed since stand apart from those that have not. */
const steadyMean = 0.05;
const stays = 0.8;
/** On a wheel that is a little rough all round, a tooth must stand out by so many rms; on a very rough one none need. */
const standsOut = 6;
const roughAllRound = 0.03;
/** Significance: so many standard errors of the mean over turns. */
const significant = 5;
/** So many orders may be the shaft's own sway; fewer on wheels of few teeth, where they would be the teeth themselves. */
const mostOrders = 4;
const positionsPerOrder = 8;
const mostApart = 0.4;
/** Where all teeth lie within so small a part of a limit, no single one stands out by it. */
const plain = 0.6;

type Flanks = Pick<WheelSpacing, 'turns' | 'step' | 'stepVariance'>;
type Verdict = Pick<Finding, 'severity' | 'outcome' | 'at' | 'evidence'>;

/**
 * Certain teeth stand off their places, or show a swing of their own, turn after turn. What the shaft's sway or an
 * eccentric wheel could make too, a slow wave over the turn, is taken out first: that is run-out's. Rising flanks are judged,
 * which the speed comes from, and where those stand well the falling ones.
 */
export class UnevenTeethRule implements FindingRule {
  readonly latches = [new FindingLatch(2)];
  private readonly context: RuleContext;
  private readonly look: WheelLook;
  private readonly falls: FallingFlanks | null = null;
  private readonly steps: WheelOrders | null = null;
  private readonly swings: WheelOrders | null = null;
  private readonly scratch: Float64Array | null = null;
  private readonly sorting: Float64Array | null = null;
  private readonly apart: Uint8Array | null = null;
  private readonly orders: number;
  private verdict: Verdict | null = null;
  /** Mean swing at the last look, V. */
  private meanBeforeV = NaN;

  constructor(context: RuleContext) {
    this.context = context;
    this.look = new WheelLook(context);
    const { face } = this.look;
    const positions = face?.positions ?? 0;
    this.orders = Math.min(mostOrders, Math.floor(positions / positionsPerOrder));
    if (!face || face.positions < 3) return;
    this.falls = new FallingFlanks(face, context.paths[context.primary]!.log);
    this.steps = new WheelOrders(face.positions, this.orders);
    this.swings = new WheelOrders(face.positions, 1);
    this.scratch = new Float64Array(face.positions);
    this.sorting = new Float64Array(face.positions);
    this.apart = new Uint8Array(face.positions);
  }

  tick(nowS: number): void {
    const latch = this.latches[0]!;
    const { face, isKnown } = this.look;
    if (!face || !isKnown) this.verdict = null;
    else if (this.look.isDue(nowS)) this.verdict = this.judge(face, latch.open !== null);
    const { verdict } = this;
    if (verdict) {
      const { name } = this.context.paths[this.context.primary]!.channel;
      const from = Math.max(0, nowS - turnsNeeded * this.look.turnS);
      latch.raise(
        {
          code: 'uneven-teeth',
          channel: name,
          from,
          ...verdict,
          ...wordsFor('uneven-teeth', name, { ...verdict.evidence, outcome: verdict.outcome }),
          causedBy: null,
        },
        nowS,
      );
    }
    latch.rest(nowS);
  }

  private judge(face: WheelFaceMeter, isOpen: boolean): Verdict | null {
    const { falls, steps, swings } = this;
    if (!falls || !steps || !swings) return null;
    falls.look();
    if (face.turns < turnsNeeded) return null;
    const easier = isOpen ? stays : 1;
    const spacing =
      this.bySpacing(face, face.spacing, steps, easier) ?? this.bySpacing(face, falls, steps, easier);
    const swing = this.bySwing(face, swings, easier);
    // The flanks of a weak tooth cross the band late and early: it seems off its place too.
    const isAside = spacing && swing && !isNear(spacing, swing, face.positions);
    return isAside ? spacing : (swing ?? spacing);
  }

  private bySpacing(face: WheelFaceMeter, by: Flanks, steps: WheelOrders, easier: number): Verdict | null {
    if (by.turns < turnsNeeded) return null;
    const { positions } = face;
    const { least, most } = rangeOf(by.step);
    if (most - least < easier * offShare * plain) return null;
    const values = ofTeethThere(by.step, face, this.scratch!);
    // The first tooth after the gap comes early or late by what sensor and filter make of the gap.
    if (face.missing > 0) values[1] = NaN;
    steps.fit(values, this.orders);
    const { left } = steps;
    const isRough = Math.sqrt(steps.leftVariance) > roughAllRound;
    const roughBefore = roughness(left, this.sorting!);
    // Teeth that stand out must not bend the wave that is taken out of the others, which then leaves less of those than there is.
    if (this.setApart(left)) steps.fit(values, this.orders, this.apart);
    const rough = Math.max(roughBefore, roughness(left, this.sorting!));
    const limit = easier * (isRough ? offShare : Math.max(offShare, standsOut * rough));
    const isFalling = by !== face.spacing;
    const grid = isFalling ? this.sampleShare : this.gridShare();
    let worstStep = 0;
    for (let k = 0; k < positions; k++) {
      const off = Math.abs(left[k]!);
      // A step that scatters less than the sample grid makes it has always been sampled alike: it is known to a sample only.
      if (off < 1.25 * grid && by.stepVariance[k]! < (grid * grid) / 12) continue;
      const error = Math.sqrt(by.stepVariance[k]! / memoryWorth);
      if (off > limit && off > significant * error && off > worstStep) worstStep = off;
    }
    if (worstStep === 0) return null;
    const { worst, teeth, worstOff } = displaced(left, limit);
    const pattern = patternOf(left, this.orders);
    const evidence = {
      position: face.numberOf(worst),
      positions,
      numbering: numberingOf(face),
      offPercent: 100 * worstOff,
      offDeg: (360 * worstOff) / positions,
      stepPercent: 100 * worstStep,
      teeth,
      pattern: pattern.name,
      ...(pattern.order > 0 && { order: pattern.order }),
      turns: by.turns,
      ...(isFalling && { flank: 'falling' }),
    };
    const isUnsure = pattern.name === 'one order' || (this.orders === 0 && slowWave(steps));
    // A shaft that sways moves rising flanks too: a wave of falling ones alone is what the swing does to them.
    if (isUnsure && isFalling) return null;
    return {
      severity: isUnsure ? 'note' : worstStep > faultShare ? 'fault' : 'warn',
      outcome: isUnsure ? 'cannot-tell' : 'found',
      at: face.seenS[worst]!,
      evidence,
    };
  }

  /** A sample as a share of the pitch, where flanks are so steep that the instant of an edge is known to a sample only; else 0. */
  private gridShare(): number {
    const { rateHz, paths, primary } = this.context;
    const { log } = paths[primary]!;
    const sigma = log.sigmaS[(log.count - 1) & log.mask]! * rateHz;
    return sigma > 0.28 && sigma < 0.45 ? this.sampleShare : 0;
  }

  /** Of the pitch. How steep falling flanks are is not known. */
  private get sampleShare(): number {
    const { rateHz, motion } = this.context;
    return 1 / (rateHz * motion.train.placer.tracker.pitchS);
  }

  private setApart(left: Float64Array): boolean {
    const { apart } = this;
    if (!apart || this.orders === 0) return false;
    const limit = Math.max(offShare / 2, 2.5 * roughness(left, this.sorting!));
    let count = 0;
    for (let k = 0; k < left.length; k++) {
      apart[k] = Math.abs(left[k]!) > limit ? 1 : 0;
      count += apart[k]!;
    }
    return count > 0 && count <= mostApart * left.length;
  }

  private bySwing(face: WheelFaceMeter, swings: WheelOrders, easier: number): Verdict | null {
    const { positions, missing, swingVariance, counts } = face;
    const { least, most } = rangeOf(face.swingV);
    const meanV = meanOf(face.swingV);
    const isSteady = Math.abs(meanV - this.meanBeforeV) < steadyMean * meanV;
    this.meanBeforeV = meanV;
    if (!isSteady || most - least < easier * swingShare * plain * least) return null;
    swings.fit(ofTeethThere(face.swingV, face, this.scratch!), positions >= positionsPerOrder ? 1 : 0);
    // A wave over the turn is run-out's; one weak tooth makes hardly any.
    const isWave = swings.leftVariance < 0.5 * swings.variance;
    const middle = middleMagnitude(this.scratch!, this.sorting!);
    let worst = -1;
    let worstShare = 0;
    let teeth = 0;
    for (let k = 0; k < positions; k++) {
      // Beside a gap a tooth shows what the filter and the sensor make of the gap.
      if (missing > 0 && (k === 0 || k === positions - missing - 1)) continue;
      if (counts[k]! < turnsNeeded || Math.sqrt(swingVariance[k]!) > steadySwing * middle) continue;
      const share = (isWave ? swings.left[k]! : this.scratch![k]! - middle) / middle;
      if (!(Math.abs(share) > easier * swingShare)) continue;
      teeth++;
      if (Math.abs(share) <= Math.abs(worstShare)) continue;
      worst = k;
      worstShare = share;
    }
    if (worst < 0) return null;
    return {
      severity: 'warn',
      outcome: 'found',
      at: face.seenS[worst]!,
      evidence: {
        position: face.numberOf(worst),
        positions,
        numbering: numberingOf(face),
        swingPercent: 100 * worstShare,
        swingV: face.swingV[worst]!,
        othersV: middle,
        teeth,
        turns: face.turns,
      },
    };
  }
}

function isNear(a: Verdict, b: Verdict, positions: number): boolean {
  const apart = Math.abs(Number(a.evidence.position) - Number(b.evidence.position));
  return Math.min(apart, positions - apart) <= 1;
}
