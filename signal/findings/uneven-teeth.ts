import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { ofTeethThere, rangeOf, WheelLook } from '@/signal/findings/wheel-look';
import { wordsFor } from '@/signal/finding-words';
import type { Finding } from '@/signal/model';
import { memoryWorth } from '@/signal/wheel-face-meter';
import type { WheelFaceMeter } from '@/signal/wheel-face-meter';
import { middleMagnitude, WheelOrders } from '@/signal/wheel-orders';

const turnsNeeded = 10;
/** Share of the pitch by which a tooth's distance to its neighbour is off; open findings stay down to four fifths. */
const offShare = 0.05;
const faultShare = 0.15;
/** Share of the swing by which a tooth is weaker or stronger than the others. */
const swingShare = 0.4;
const steadySwing = 0.1;
const stays = 0.8;
/** On a wheel that is a little rough all round, a tooth must stand out by so many rms; on a very rough one none need. */
const standsOut = 5.5;
const roughAllRound = 0.03;
/** Significance: so many standard errors of the mean over turns. */
const significant = 5;
/** So many orders may be the shaft's own sway; fewer on wheels of few teeth, where they would be the teeth themselves. */
const mostOrders = 4;
const positionsPerOrder = 8;
const mostApart = 0.4;
/** One order that holds so large a share of what is left may be the shaft's sway too. */
const oneOrder = 0.8;
const fewestForOneOrder = 16;
const ordersUpTo = 512;
const alternating = 0.8;
/** Where all teeth lie within so small a part of a limit, no single one stands out by it. */
const plain = 0.6;

type Verdict = Pick<Finding, 'severity' | 'outcome' | 'at' | 'evidence'>;

/**
 * Certain teeth stand off their places, or show a swing of their own, turn after turn. What the shaft's sway or an
 * eccentric wheel could make too, a slow wave over the turn, is taken out first: that is run-out's.
 */
export class UnevenTeethRule implements FindingRule {
  readonly latches = [new FindingLatch(2)];
  private readonly context: RuleContext;
  private readonly look: WheelLook;
  private readonly steps: WheelOrders | null = null;
  private readonly swings: WheelOrders | null = null;
  private readonly scratch: Float64Array | null = null;
  private readonly sorting: Float64Array | null = null;
  private readonly apart: Uint8Array | null = null;
  private readonly orders: number;
  private verdict: Verdict | null = null;

  constructor(context: RuleContext) {
    this.context = context;
    this.look = new WheelLook(context);
    const { face } = this.look;
    const positions = face?.positions ?? 0;
    this.orders = Math.min(mostOrders, Math.floor(positions / positionsPerOrder));
    if (!face || face.positions < 3) return;
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
    const { steps, swings } = this;
    if (!steps || !swings || face.turns < turnsNeeded) return null;
    const easier = isOpen ? stays : 1;
    const spacing = this.bySpacing(face, steps, easier);
    const swing = this.bySwing(face, swings, easier);
    // The flanks of a weak tooth cross the band late and early: it seems off its place too.
    const isAside = spacing && swing && !isNear(spacing, swing, face.positions);
    return isAside ? spacing : (swing ?? spacing);
  }

  private bySpacing(face: WheelFaceMeter, steps: WheelOrders, easier: number): Verdict | null {
    if (face.learntTurns < turnsNeeded) return null;
    const { positions } = face;
    const { least, most } = rangeOf(face.step);
    if (most - least < easier * offShare * plain) return null;
    const values = ofTeethThere(face.step, face, this.scratch!);
    // The first tooth after the gap comes early or late by what sensor and filter make of the gap.
    if (face.missing > 0) values[1] = NaN;
    steps.fit(values, this.orders);
    const { left } = steps;
    const isRough = Math.sqrt(steps.leftVariance) > roughAllRound;
    // Teeth that stand out must not bend the wave that is taken out of the others.
    if (this.setApart(left)) steps.fit(values, this.orders, this.apart);
    const rough = roughness(left, this.sorting!);
    const limit = easier * (isRough ? offShare : Math.max(offShare, standsOut * rough));
    const grid = this.gridShare();
    let worstStep = 0;
    for (let k = 0; k < positions; k++) {
      const off = Math.abs(left[k]!);
      // A step that scatters less than the sample grid makes it has always been sampled alike: it is known to a sample only.
      if (off < 1.25 * grid && face.stepVariance[k]! < (grid * grid) / 12) continue;
      const error = Math.sqrt(face.stepVariance[k]! / memoryWorth);
      if (off > limit && off > significant * error && off > worstStep) worstStep = off;
    }
    if (worstStep === 0) return null;
    const { worst, teeth, worstOff } = displaced(left, limit);
    const pattern = patternOf(left, this.orders);
    const evidence = {
      position: face.numberOf(worst),
      positions,
      numbering: face.missing > 0 ? 'fixed to the wheel' : 'relative',
      offPercent: 100 * worstOff,
      offDeg: (360 * worstOff) / positions,
      stepPercent: 100 * worstStep,
      teeth,
      pattern: pattern.name,
      ...(pattern.order > 0 && { order: pattern.order }),
      turns: face.learntTurns,
    };
    const isUnsure = pattern.name === 'one order' || (this.orders === 0 && slowWave(steps));
    return {
      severity: isUnsure ? 'note' : worstStep > faultShare ? 'fault' : 'warn',
      outcome: isUnsure ? 'cannot-tell' : 'found',
      at: face.seenS[worst]!,
      evidence,
    };
  }

  /** A sample as a share of the pitch, where flanks are so steep that the instant of an edge is known to a sample only; else 0. */
  private gridShare(): number {
    const { rateHz, paths, primary, motion } = this.context;
    const { log } = paths[primary]!;
    const sigma = log.sigmaS[(log.count - 1) & log.mask]! * rateHz;
    return sigma > 0.28 && sigma < 0.45 ? 1 / (rateHz * motion.train.placer.tracker.pitchS) : 0;
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
    if (most - least < easier * swingShare * plain * least) return null;
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
        numbering: missing > 0 ? 'fixed to the wheel' : 'relative',
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

/** Rms of what is left, by its middle, so that single teeth do not count. */
function roughness(left: Float64Array, scratch: Float64Array): number {
  return 1.4826 * middleMagnitude(left, scratch);
}

/** Which tooth stands off most: its distances to both neighbours are off the opposite way. */
function displaced(left: Float64Array, limit: number): { worst: number; worstOff: number; teeth: number } {
  const n = left.length;
  const offOf = (k: number): number => {
    const before = left[k]!;
    const after = left[(k + 1) % n]!;
    if (Number.isNaN(after)) return before;
    return Number.isNaN(before) ? -after : (before - after) / 2;
  };
  let worst = 0;
  let worstOff = 0;
  for (let k = 0; k < n; k++) {
    const off = offOf(k);
    if (!(Math.abs(off) > Math.abs(worstOff))) continue;
    worst = k;
    worstOff = off;
  }
  let teeth = 0;
  // A neighbour of a tooth that is off seems off by half as much.
  for (let k = 0; k < n; k++) if (Math.abs(offOf(k)) > Math.max(0.6 * Math.abs(worstOff), limit / 2)) teeth++;
  return { worst, worstOff, teeth };
}

function patternOf(left: Float64Array, orders: number): { name: string; order: number } {
  const n = left.length;
  const full = left.map((value) => (Number.isNaN(value) ? 0 : value));
  const energy = full.reduce((sum, value) => sum + value * value, 0);
  const neighbours = full.reduce((sum, value, k) => sum + value * full[(k + 1) % n]!, 0);
  // Cosine of the turn from tooth to tooth: -1 where every second one is off, -0.5 where one is.
  if (neighbours < -alternating * energy) return { name: 'every second tooth', order: 0 };
  if (n <= ordersUpTo && n >= fewestForOneOrder) {
    for (let r = orders + 1; 2 * r < n; r++) {
      let re = 0;
      let im = 0;
      for (let k = 0; k < n; k++) {
        re += full[k]! * Math.cos((2 * Math.PI * r * k) / n);
        im += full[k]! * Math.sin((2 * Math.PI * r * k) / n);
      }
      if ((2 * (re * re + im * im)) / n > oneOrder * energy) return { name: 'one order', order: r };
    }
  }
  return { name: 'single teeth', order: 0 };
}

/** On a wheel of few teeth: the first order holds most of it, as a sway of the shaft would. */
function slowWave(steps: WheelOrders): boolean {
  const { left, positions, variance } = steps;
  let re = 0;
  let im = 0;
  for (let k = 0; k < positions; k++) {
    const value = Number.isNaN(left[k]!) ? 0 : left[k]!;
    re += value * Math.cos((2 * Math.PI * k) / positions);
    im += value * Math.sin((2 * Math.PI * k) / positions);
  }
  return positions > 2 && (2 * (re * re + im * im)) / positions > oneOrder * positions * variance;
}
