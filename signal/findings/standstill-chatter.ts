import { EdgeWalk } from '@/signal/findings/edge-walk';
import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { grown, unrestOf } from '@/signal/findings/unrest';
import type { RunReference, Unrest } from '@/signal/findings/unrest';
import { wordsFor } from '@/signal/finding-words';
import { stepTable } from '@/signal/step-table';
import type { StepTable } from '@/signal/step-table';

/** Swings below this share of what they were at speed are not those of whole teeth. */
const tiny = 0.4;
/** So many times longer than at speed, and the shaft has slowed down at least. */
const slowed = 1.5;
/** Larger ratios of neighbouring intervals are those of bounce on a slow flank, or of a shaft that stops and starts. */
const mostRatio = 2.2;
const faultPerS = 5;
/** A ring: so many edges within the window, none of which led further than this, steps. */
const edgesNeeded = 8;
const mostRange = 3;
const windowS = 2;
const bookEveryS = 0.1;
const bookLength = 24;
const bookMask = 31;

type Seen = { fromS: number; atS: number; perS: number; evidence: Record<string, number | string> };

/**
 * The shaft stands with a flank under the sensor, and shaking or noise carries the signal through the band and back. A
 * single channel counts each time; a ring of states steps to and fro, and its direction flickers. A shaft that swings by
 * more than a tooth really moves, and is none of it.
 */
export class StandstillChatterRule implements FindingRule {
  readonly latches = [new FindingLatch(2)];
  private readonly context: RuleContext;
  private readonly table: StepTable | null;
  private readonly walk: EdgeWalk | null;
  private readonly references: RunReference[];
  private gapS = -Infinity;
  /** The last seconds of a ring: time, net steps and edges of all lanes; entry `n` is at `n & bookMask`. */
  private readonly bookS = new Float64Array(bookMask + 1).fill(NaN);
  private readonly bookNet = new Float64Array(bookMask + 1);
  private readonly bookEdges = new Float64Array(bookMask + 1);
  private entries = 0;

  /** @param references of the lanes, in their order. */
  constructor(context: RuleContext, references: RunReference[]) {
    this.context = context;
    this.table = stepTable(context.rig.sensing);
    this.walk = this.table && new EdgeWalk(context, this.table);
    this.references = references;
  }

  tick(nowS: number): void {
    const latch = this.latches[0]!;
    for (const reference of this.references) {
      reference.isHeld = latch.open !== null;
      reference.tick(nowS);
    }
    const seen = this.walk ? this.ofRing(this.walk, nowS) : this.ofSingle(nowS);
    if (seen) {
      const { paths, primary } = this.context;
      const { name } = paths[primary]!.channel;
      latch.raise(
        {
          code: 'standstill-chatter',
          channel: this.walk ? null : name,
          from: seen.fromS,
          severity: !this.walk && seen.perS > faultPerS ? 'fault' : 'warn',
          outcome: 'found',
          at: seen.atS,
          evidence: seen.evidence,
          ...wordsFor('standstill-chatter', name, seen.evidence),
          causedBy: null,
        },
        nowS,
      );
    }
    latch.rest(nowS);
  }

  gap({ toS }: { toS: number }): void {
    this.gapS = toS;
    this.entries = 0;
  }

  private ofSingle(nowS: number): Seen | null {
    const { context, gapS } = this;
    const { paths, primary, rateHz, rig } = context;
    const { log } = paths[primary]!;
    const { swingV, toothS, hasSlowed } = this.references[0]!;
    // What never turned steadily may be turned by hand.
    if (Number.isNaN(toothS)) return null;
    const last = (log.count - 2) & log.mask;
    if (!hasSlowed && !(log.peakV[last]! - log.troughV[last]! < tiny * swingV)) return null;
    const unrest = unrestOf(log, gapS, 1 / rateHz, rig.wheel.missingPulses);
    if (!unrest?.isIrregular || !isGoingOn(unrest, nowS)) return null;
    // What was learnt from was no wheel.
    if (unrest.mostV > grown * swingV) return null;
    const isTiny = unrest.mostV < tiny * swingV;
    const isSlow = hasSlowed && unrest.mostRatio < mostRatio;
    if (!isTiny && !isSlow) return null;
    const evidence = { teethHz: 1 / unrest.meanS, largestSwingV: unrest.mostV, usualSwingV: swingV };
    return { fromS: unrest.fromS, atS: unrest.lastS, perS: 1 / unrest.meanS, evidence };
  }

  private ofRing(walk: EdgeWalk, nowS: number): Seen | null {
    const { tracker } = this.context.motion;
    if (!tracker) return null;
    const { context, bookS, bookNet, bookEdges } = this;
    let edges = 0;
    for (let k = 0; k < context.lanes.length; k++) edges += context.paths[context.lanes[k]!]!.edgeCount;
    const net = tracker.netSteps;
    if (this.entries === 0 || nowS - bookS[(this.entries - 1) & bookMask]! >= bookEveryS) {
      const n = this.entries++ & bookMask;
      bookS[n] = nowS;
      bookNet[n] = net;
      bookEdges[n] = edges;
    }
    let oldest = Math.max(0, this.entries - bookLength);
    while (oldest < this.entries - 1 && bookS[oldest & bookMask]! < nowS - windowS) oldest++;
    const n = oldest & bookMask;
    // Nothing but subtractions while the shaft turns or rests.
    if (edges - bookEdges[n]! < edgesNeeded || Math.abs(net - bookNet[n]!) > mostRange) return null;
    return this.readBack(walk, bookS[n]!, nowS);
  }

  private readBack(walk: EdgeWalk, fromS: number, nowS: number): Seen | null {
    const { context, references } = this;
    let net = 0;
    let low = 0;
    let high = 0;
    let steps = 0;
    let skips = 0;
    let firstS = NaN;
    let lastS = NaN;
    const perLane = context.lanes.map(() => 0);
    walk.start(fromS);
    while (walk.advance()) {
      perLane[walk.lane]!++;
      if (Number.isNaN(firstS)) firstS = walk.atS;
      lastS = walk.atS;
      if (walk.isIllegal) skips++;
      if (Math.abs(walk.step) !== 1) continue;
      net += walk.step;
      steps++;
      low = Math.min(low, net);
      high = Math.max(high, net);
    }
    // Skipped states lead nowhere either.
    if (high - low > mostRange || steps < edgesNeeded || skips > steps / 4) return null;
    let busiest = 0;
    perLane.forEach((count, lane) => {
      if (count > perLane[busiest]!) busiest = lane;
    });
    const { log } = context.paths[context.lanes[busiest]!]!;
    const unrest = unrestOf(log, this.gapS, 1 / context.rateHz, context.rig.wheel.missingPulses);
    const { swingV, toothS } = references[busiest]!;
    if (!unrest || !isGoingOn(unrest, nowS)) return null;
    // As regular and quick as at speed, the shaft turns: other channels are dead, or in step with this one.
    const others = perLane.some((count, lane) => lane !== busiest && count >= 2);
    const isSlow = unrest.meanS > (others ? slowed : 2 * slowed) * toothS;
    if (!unrest.isIrregular && !(unrest.mostV < tiny * swingV) && !isSlow) return null;
    const perS = perLane.reduce((sum, count) => sum + count, 0) / (lastS - firstS);
    const evidence: Record<string, number | string> = {
      stepsHz: perS,
      steps,
      netSteps: net,
      busiestChannel: context.paths[context.lanes[busiest]!]!.channel.name,
    };
    return { fromS: firstS, atS: lastS, perS, evidence };
  }
}

function isGoingOn(unrest: Unrest, nowS: number): boolean {
  return nowS - unrest.lastS < 2.5 * unrest.meanS;
}
