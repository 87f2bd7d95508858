/**
 * Changes of the said direction that no shaft can have made. A shaft that turns back comes to rest on the way: its teeth
 * grow long before the change and short again after it. Where they keep coming as before, the direction was wrong before
 * the change, or is wrong after it.
 */
import { EdgeWalk } from '@/signal/findings/edge-walk';
import type { RuleContext } from '@/signal/findings/rule';
import { stepTable } from '@/signal/step-table';
import type { StepTable } from '@/signal/step-table';
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

/** Teeth that have to be known on either side of the change. */
const teethAround = 3;
/** No interval near the change may be longer than so many usual ones; turning back makes one of at least two. */
const longest = 1.6;
const onTime = 1.15;
/**
 * To turn back within one tooth takes 4 pi / (N gear T^2) for a tooth of T. Below the first of these a servo may well do so;
 * above the second it is beyond a shaft with anything on it; between them the data cannot tell, rad/s2.
 */
const doubtfulRadPerS2 = 250;
const beyondRadPerS2 = 1000;
const mostPending = 64;
const mostWaitS = 1.5;

/**
 * `isCertain`: no shaft does that. `jumps`: by what share of a tooth each lane's row of rises jumped at the change, 0..1; NaN
 * where it is not steady.
 */
export type Flip = { t: number; toothS: number; radPerS2: number; isCertain: boolean; jumps: number[] };

export class FlipWatch {
  /** Changes that the last `tick` found impossible, or doubtful, in order. */
  readonly found: Flip[] = [];
  private readonly context: RuleContext;
  private readonly walk: EdgeWalk | null;
  private readonly pending: number[] = [];
  private disturbances = 0;
  private said = 'unknown';
  private lastTickS = -Infinity;
  private lastFlipS = -Infinity;

  constructor(context: RuleContext) {
    this.context = context;
    const table: StepTable | null = stepTable(context.rig.sensing);
    this.walk = table ? new EdgeWalk(context, table) : null;
  }

  tick(nowS: number): void {
    // Setting a length takes far longer than asking for it.
    if (this.found.length > 0) this.found.length = 0;
    const { motion } = this.context;
    const isDisturbed = motion.calm.disturbances !== this.disturbances;
    this.disturbances = motion.calm.disturbances;
    if (isDisturbed) {
      if (this.walk) this.collect(this.walk);
      else this.compare();
    }
    this.said = motion.direction;
    this.lastTickS = nowS;
    if (this.pending.length > 0) this.settle(nowS);
  }

  gap(): void {
    this.pending.length = 0;
    this.said = 'unknown';
  }

  /** An arrangement that tells the direction by itself: seen at ticks only. */
  private compare(): void {
    const { motion } = this.context;
    const isEither = (value: string) => value === 'forward' || value === 'reverse';
    if (isEither(motion.direction) && isEither(this.said) && motion.direction !== this.said)
      this.pending.push(motion.calm.sinceS);
  }

  /** The direction is said, and changes, after two steps the same way. */
  private collect(walk: EdgeWalk): void {
    const { train } = this.context.motion;
    const leadS = 2 * (Number.isNaN(train.periodS) ? 0 : train.periodS) + 0.01;
    walk.start(Math.max(this.lastTickS - leadS, this.lastTickS - 1));
    let sense = 0;
    while (walk.advance()) {
      const said = walk.tracker.sense;
      if (said === sense) continue;
      if (sense !== 0 && walk.atS > this.lastFlipS) {
        this.lastFlipS = walk.atS;
        if (this.pending.length < mostPending) this.pending.push(walk.atS);
      }
      sense = said;
    }
  }

  /** @returns null where a shaft can have made this change. */
  private judge(t: number, around: readonly (Around | null)[]): Flip | null {
    const { pulsesPerTurn, gearRatio } = this.context.rig.wheel;
    const steady = around.find((one) => one?.isSteady);
    if (!steady) return null;
    const { toothS } = steady;
    const radPerS2 = (4 * Math.PI) / (pulsesPerTurn * gearRatio * toothS * toothS);
    const isOnTime = around.every((one) => one?.isOnTime);
    if (!isOnTime && radPerS2 < doubtfulRadPerS2) return null;
    const isCertain = isOnTime || radPerS2 > beyondRadPerS2;
    return { t, toothS, radPerS2, isCertain, jumps: around.map((one) => one?.jump ?? NaN) };
  }

  private settle(nowS: number): void {
    const { paths, lanes, motion } = this.context;
    let kept = 0;
    for (const t of this.pending) {
      const around = lanes.map((index) => judgeAround(paths[index]!.log, t));
      const isWhole = around.every((one) => one !== null);
      // A dead channel is not waited for for ever, nor is a shaft that stopped.
      if (!isWhole && motion.state !== 'stopped' && nowS - t < mostWaitS) {
        this.pending[kept++] = t;
        continue;
      }
      const flip = this.judge(t, around);
      if (flip) this.found.push(flip);
    }
    this.pending.length = kept;
  }
}

type Around = { toothS: number; isSteady: boolean; isOnTime: boolean; jump: number };

/** @returns null where the teeth on either side of `t` are not known (yet). */
function judgeAround(log: ToothLog, t: number): Around | null {
  let tooth = log.count - 1;
  const oldest = readableFrom(log, 0);
  while (tooth >= oldest && log.riseS[tooth & log.mask]! > t) tooth--;
  const from = tooth - teethAround;
  if (from < oldest || tooth + teethAround >= log.count) return null;
  const intervals: number[] = [];
  for (let k = from; k < tooth + teethAround; k++)
    intervals.push(log.riseS[(k + 1) & log.mask]! - log.riseS[k & log.mask]!);
  const sorted = intervals.toSorted((a, b) => a - b);
  const toothS = (sorted[teethAround - 1]! + sorted[teethAround]!) / 2;
  const within = (ratio: number) => intervals.filter((one) => one < ratio * toothS && toothS < ratio * one);
  // The change is said two steps late: the teeth right beside it belong to neither side.
  const turned = (log.riseS[(tooth + 2) & log.mask]! - log.riseS[(tooth - 2) & log.mask]!) / toothS;
  return {
    toothS,
    jump: turned - Math.floor(turned),
    isSteady: sorted.at(-1)! < longest * toothS && within(onTime).length >= intervals.length - 1,
    isOnTime: within(onTime).length === intervals.length,
  };
}
