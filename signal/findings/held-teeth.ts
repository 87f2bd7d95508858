/**
 * A hold-off that is longer than the shorter way from edge to edge: it eats edges of teeth, and what is left is a slower
 * shaft. Edges and what it ate are all that came. Bounce is eaten as well, and rightly; but there the signal goes up and down
 * as often as there are edges, where teeth are eaten it does so more often.
 */
import type { ChannelPath } from '@/signal/channel-path';
import { findingOf } from '@/signal/findings/channel-finding';
import { RingTone } from '@/signal/findings/ring-tone';
import { foldedHz } from '@/signal/findings/tone-place';
import type { RuleContext } from '@/signal/findings/rule';
import { wordsFor } from '@/signal/finding-words';
import type { Finding } from '@/signal/model';

export type HeldTeeth = {
  fromS: number;
  holdoffS: number;
  /** From tooth to tooth as they came, and as they are counted, s. */
  toothS: number;
  countedS: number;
  sure: boolean;
};

/** What is looked at at once: so long, and so many edges; or fewer among so many crossings. */
const windowS = 0.5;
const fewestEdges = 8;
const fewAmongMany = 4;
const manyFlanks = 32;
/** It is so for so long, s. */
const provenS = 0.9;
/** Edges that come further apart than so many hold-offs are none that it let through by chance. */
const mostHoldoffs = 2;
const fewestEaten = 2;
/** Nearer than that the tone is that of the teeth: share, and bins. */
const sameShare = 0.02;
const sameBins = 2;
const harmonics = 3;
/** Farther from the rate of the teeth than this it is none of theirs. */
const farShare = 0.35;
/** Teeth come at least so much faster than they are counted. */
const leastFaster = 1.005;

export class HeldTeethWatch {
  /** Between the last two looks, s. */
  looksS = 0;
  private readonly context: RuleContext;
  private readonly path: ChannelPath;
  private readonly tone: RingTone;
  private fromS = NaN;
  private edges = 0;
  private eaten = 0;
  private seenFromS = NaN;

  constructor(context: RuleContext) {
    this.context = context;
    this.path = context.paths[context.primary]!;
    this.tone = new RingTone(this.path.slow.rateHz);
  }

  /** To be asked at every tick. @returns null where nothing is to be said now. */
  look(nowS: number): HeldTeeth | null {
    const { path, context } = this;
    const { holdoffS } = context.settings;
    if (!(holdoffS > 0)) return null;
    const edges = path.edgeCount - this.edges;
    const eaten = path.eatenCount - this.eaten;
    const spanS = nowS - this.fromS;
    const enough = edges >= fewestEdges || (edges >= fewAmongMany && edges + eaten >= manyFlanks);
    if (spanS < windowS || (!enough && spanS < mostHoldoffs * fewestEdges * holdoffS)) return null;
    const held = enough ? this.judge(edges, eaten, spanS) : null;
    const { fromS } = this;
    this.restart(nowS);
    this.looksS = spanS;
    if (!held) this.seenFromS = NaN;
    else if (Number.isNaN(this.seenFromS)) this.seenFromS = fromS;
    return held && nowS - this.seenFromS >= provenS ? { ...held, fromS: this.seenFromS } : null;
  }

  /** What came up to now is left out: samples were lost. */
  restart(nowS: number): void {
    const { path } = this;
    this.fromS = nowS;
    this.edges = path.edgeCount;
    this.eaten = path.eatenCount;
  }

  private judge(edges: number, eaten: number, spanS: number): Omit<HeldTeeth, 'fromS'> | null {
    const { holdoffS } = this.context.settings;
    const flanks = edges + eaten;
    if (!(spanS / edges < mostHoldoffs * holdoffS)) return null;
    if (!(spanS / flanks < holdoffS) || eaten < fewestEaten) return null;
    const comeHz = flanks / 2 / spanS;
    const countedHz = edges / 2 / spanS;
    const { tone, path } = this;
    const seenHz = tone.look(path.slow) ? this.toothHz(comeHz) : NaN;
    const sure = seenHz > leastFaster * countedHz && 2 * seenHz * holdoffS > 1;
    const asCounted = this.isTone(countedHz, 1);
    // The signal goes up and down as the edges do: what was kept back is bounce.
    if (!sure && asCounted) return null;
    // Folded, it may be either.
    const isBoth = asCounted && 2 * comeHz > path.slow.rateHz;
    return { holdoffS, toothS: 1 / (sure ? seenHz : comeHz), countedS: 1 / countedHz, sure: sure && !isBoth };
  }

  /**
   * Of the tone, where it is that of teeth which come about `aboutHz`; NaN: it is not. Stretches that are scanned again are
   * counted again, so that it need not be near, as long as it is the only one that folds to there.
   */
  private toothHz(aboutHz: number): number {
    if (this.isTone(aboutHz, harmonics)) return aboutHz;
    const { hz } = this.tone;
    const ringHz = this.path.slow.rateHz;
    let nearHz = NaN;
    for (let whole = 0; whole < 2 * aboutHz + ringHz; whole += ringHz) {
      for (const oneHz of [whole - hz, whole + hz]) {
        if (!(Math.abs(oneHz / aboutHz - 1) < farShare)) continue;
        if (!Number.isNaN(nearHz)) return NaN;
        nearHz = oneHz;
      }
    }
    return nearHz;
  }

  /** True where the signal swings at `hz`, or, as narrow teeth do, most at a multiple of it. */
  private isTone(hz: number, most: number): boolean {
    const { tone, path } = this;
    // Of what folds, only the first: with more of them any tone is hit.
    for (let h = 1; h <= most && (h === 1 || 2 * h * hz < path.slow.rateHz); h++) {
      const reachHz = sameBins * tone.binHz + sameShare * h * hz;
      if (Math.abs(foldedHz(h * hz, path.slow.rateHz) - tone.hz) < reachHz) return true;
    }
    return false;
  }
}

export function heldFinding({ rig, paths, primary }: RuleContext, held: HeldTeeth): Omit<Finding, 'to'> {
  const { fromS, holdoffS, toothS, countedS, sure } = held;
  const { pulsesPerTurn, gearRatio } = rig.wheel;
  const evidence = {
    by: 'hold-off',
    holdoffS,
    toothS,
    limitS: toothS / 2,
    countedEveryS: countedS,
    speedTimes: toothS / countedS,
    limitRpm: 60 / (2 * holdoffS * pulsesPerTurn * gearRatio),
  };
  const outcome = sure ? 'found' : 'cannot-tell';
  const { name } = paths[primary]!.channel;
  return {
    ...findingOf('wrong-count', name, { fromS, atS: fromS, severity: 'fault', outcome, evidence }),
    ...wordsFor('wrong-count', name, { ...evidence, outcome }),
  };
}
