/**
 * A fitted band that found levels in noise which all but fills them: edges come, yet many are the noise's own. What is said
 * of whole turns keeps silent there, since teeth so small beside the noise may be noise.
 */
import type { RuleContext } from '@/signal/findings/rule';
import type { SwingSight } from '@/signal/findings/swing-sights';

const everyS = 0.45;
const fewestEdges = 8;
const looksNeeded = 2;
/** Levels, peak to peak, over the noise: opens, and stays. */
const opensBelow = 13;
const staysBelow = 15;
/** With fewer samples a tooth, what is taken for noise is signal too. */
const fewestSamples = 10;
/** Less is noise or hum on a line at rest: share of the supply. */
const ofSupply = 0.02;
const humOfSupply = 0.1;

export class NoisyEdges {
  private readonly context: RuleContext;
  private readonly index: number;
  private lookedS = -Infinity;
  private edges = 0;
  private seen = 0;

  constructor(context: RuleContext, index: number) {
    this.context = context;
    this.index = index;
  }

  /** @returns null where nothing is to be said now. */
  look(nowS: number): SwingSight | null {
    const { context, index } = this;
    if (nowS - this.lookedS < everyS) return null;
    const { levels, noiseV, edgeCount, channel } = context.paths[index]!;
    const edges = edgeCount - this.edges;
    const spanS = nowS - this.lookedS;
    this.lookedS = nowS;
    this.edges = edgeCount;
    const swingV = levels.highV - levels.lowV;
    const sigmas = swingV / noiseV;
    const isNoisy = sigmas < (this.seen >= looksNeeded ? staysBelow : opensBelow);
    const carriesTeeth = channel.role !== 'aux' && channel.sensor.kind === 'linear';
    if (!isNoisy || edges < fewestEdges || !carriesTeeth || !(spanS < 2 * everyS)) {
      this.seen = 0;
      return null;
    }
    const toothHz = edges / 2 / spanS;
    if (context.rateHz < fewestSamples * toothHz || this.mayRest(swingV, toothHz)) return null;
    if (++this.seen < looksNeeded) return null;
    const evidence = { against: 'noise', swingV, noiseV, swingSigmas: sigmas };
    return { size: opensBelow / sigmas, severity: 'fault', atS: nowS - spanS, evidence };
  }

  private mayRest(swingV: number, toothHz: number): boolean {
    const { supplyV } = this.context.paths[this.index]!.channel.sensor;
    if (supplyV === null) return false;
    const isHum = [50, 60, 100, 120].some((hz) => Math.abs(toothHz / hz - 1) < 0.05);
    return swingV < (isHum ? humOfSupply : ofSupply) * supplyV;
  }
}
