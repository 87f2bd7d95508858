/**
 * What speaks against the number of pulses that a wheel is set up with: the index, its gap, and channels that do not count
 * alike. Each claim is a number that was there turn after turn, never a single turn that went wrong.
 */
import type { RuleContext } from '@/signal/findings/rule';
import type { WheelLane } from '@/signal/findings/wheel-log-reader';

export type CountClaim = {
  by: 'index' | 'gap' | 'no gap' | 'channels' | 'spacing' | 'swing';
  /** Teeth a turn that were found where there should be `setTeeth`, and positions that lack one (null: not known). */
  foundTeeth: number;
  setTeeth: number;
  foundMissing: number | null;
  turns: number;
  atS: number;
  evidence?: Record<string, number | string>;
};

const mostFactor = 8;
const nearRatio = 0.02;
/** A ratio as far from 1 as this is no tooth more or less. */
const farRatio = 1.2;
const fewestSame = 2;
const fewestOther = 4;
const gapsNeeded = 4;
/** Teeth between two gaps. */
const fewestBetween = 3;
const turnsWithoutGap = 4;
const channelTurns = 8;
const failsFrom = 1.5;

/** The nearest ratio of whole numbers up to eight, "3 : 2"; null where none is within 2 %. */
export function simpleRatio(ratio: number): { p: number; q: number } | null {
  if (!Number.isFinite(ratio)) return null;
  let best: { p: number; q: number } | null = null;
  let least = nearRatio;
  for (let q = 1; q <= mostFactor; q++) {
    for (let p = 1; p <= mostFactor; p++) {
      const off = Math.abs((ratio * q) / p - 1);
      // 2 : 1 stays before 4 : 2.
      if (off > least - 1e-9) continue;
      best = { p, q };
      least = off;
    }
  }
  return best;
}

/** Between two index pulses there were the same wrong number of counts, turn after turn. */
export function claimOfIndex(
  { indexWatch, motion, rig }: RuleContext,
  lane: WheelLane | undefined,
  nowS: number,
): CountClaim | null {
  const turn = indexWatch?.lastTurn;
  if (!indexWatch || !turn || turn.excess === 0 || motion.direction === 'stopped') return null;
  const turnS = turn.toS - turn.fromS;
  if (nowS - turn.toS > 3 * turnS + 1) return null;
  const steps = motion.tracker?.table.stepsPerCycle ?? 1;
  const setTeeth = rig.wheel.pulsesPerTurn - rig.wheel.missingPulses;
  const ratio = turn.counted / indexWatch.expected;
  const made = { by: 'index', setTeeth, foundMissing: null, atS: turn.fromS } as const;
  // Far from the number set, a count or two that jitter makes more or less do not matter.
  if (isFar(ratio) && isSame(ratio, indexWatch.meanCounted / indexWatch.expected)) {
    const turns = Math.max(indexWatch.sameInRow, indexWatch.lostTurns + indexWatch.extraTurns);
    return turns < fewestSame ? null : { ...made, foundTeeth: Math.round(turn.counted / steps), turns };
  }
  if (indexWatch.sameInRow < fewestOther) return null;
  // Steps that get lost or are made are no whole pulses; a tooth that fails and a burr have a finding of their own.
  if (turn.counted % steps !== 0 || (lane && isExplained(lane, turn.excess / steps))) return null;
  return { ...made, foundTeeth: turn.counted / steps, turns: indexWatch.sameInRow };
}

function isFar(ratio: number): boolean {
  return simpleRatio(ratio) !== null && (ratio > farRatio || ratio < 1 / farRatio);
}

function isSame(a: number, b: number): boolean {
  const one = simpleRatio(a);
  const other = simpleRatio(b);
  return one !== null && other !== null && one.p === other.p && one.q === other.q;
}

function isExplained({ absence, extras, tracker }: WheelLane, excess: number): boolean {
  let failing = 0;
  for (const score of absence.score) if (score >= failsFrom) failing++;
  return excess === extras.placesAt(tracker.count, failsFrom).length - failing;
}

/** The gap comes at another distance, or is of another width, than the wheel was set up with; or there is none. */
export function claimOfGap({ motion, rig }: RuleContext, nowS: number): CountClaim | null {
  const { tracker } = motion.train.placer;
  const { face } = motion.train;
  const { pulsesPerTurn: positions, missingPulses: missing } = rig.wheel;
  if (!tracker.isLocked) return null;
  const { between, sameBetween, spans, lastAt } = tracker.gaps;
  const since = tracker.count - Math.max(0, lastAt);
  const setTeeth = positions - missing;
  if (missing > 0 && since >= turnsWithoutGap * positions) {
    return {
      by: 'no gap',
      foundTeeth: NaN,
      setTeeth,
      foundMissing: 0,
      turns: Math.floor(since / positions),
      atS: nowS,
    };
  }
  if (sameBetween < gapsNeeded || since > 2 * between || between - spans < fewestBetween) return null;
  const found = { by: 'gap', setTeeth, turns: sameBetween, atS: nowS } as const;
  if (between !== positions) {
    // Two teeth opposite each other that fail look like a wheel of half the positions.
    if (missing === 0 && positions % between === 0) return null;
    return { ...found, foundTeeth: between - spans + 1, foundMissing: spans - 1 };
  }
  if (missing === 0 || spans === missing + 1) return null;
  // A wider gap is teeth beside it that fail, unless they have never been seen.
  const wider = spans > missing + 1;
  if (wider && (!face || tracker.position < 0 || face.counts[positions - missing - 1]! > 0)) return null;
  return { ...found, foundTeeth: positions - spans + 1, foundMissing: spans - 1 };
}

/** Channels of a ring that see the same wheel count at a simple ratio. */
export class ChannelCounts {
  private readonly context: RuleContext;
  /** Teeth a turn. */
  private readonly turn: number;
  private readonly from: number[];
  private ratio: { p: number; q: number; lane: number } | null = null;
  private inRow = 0;

  constructor(context: RuleContext) {
    const { pulsesPerTurn, missingPulses } = context.rig.wheel;
    this.context = context;
    this.turn = pulsesPerTurn - missingPulses;
    this.from = context.lanes.map(() => 0);
  }

  restart(): void {
    const { lanes, paths } = this.context;
    lanes.forEach((index, k) => (this.from[k] = paths[index]!.log.count));
  }

  claim(nowS: number): CountClaim | null {
    const { lanes, paths, motion } = this.context;
    if (lanes.length < 2) return null;
    if (motion.direction === 'stopped') {
      this.restart();
      this.inRow = 0;
    }
    const { turn } = this;
    let most = 0;
    for (let k = 0; k < lanes.length; k++) most = Math.max(most, paths[lanes[k]!]!.log.count - this.from[k]!);
    if (most >= channelTurns * turn) {
      this.judge(lanes.map((index, k) => paths[index]!.log.count - this.from[k]!));
      this.restart();
    }
    const { ratio, inRow } = this;
    if (!ratio || inRow < 2) return null;
    return {
      by: 'channels',
      foundTeeth: (turn * ratio.p) / ratio.q,
      setTeeth: turn,
      foundMissing: null,
      turns: channelTurns * inRow,
      atS: nowS,
      evidence: {
        channel: paths[lanes[ratio.lane]!]!.channel.name,
        channelPulses: ratio.p,
        firstChannel: paths[lanes[0]!]!.channel.name,
        firstChannelPulses: ratio.q,
      },
    };
  }

  private judge(counts: readonly number[]): void {
    const before = this.ratio;
    this.ratio = null;
    for (let k = 1; k < counts.length && !this.ratio; k++) {
      const share = counts[k]! / counts[0]!;
      const simple = simpleRatio(share);
      if (simple && isFar(share)) this.ratio = { ...simple, lane: k };
    }
    const { ratio } = this;
    const same =
      ratio && before && ratio.p === before.p && ratio.q === before.q && ratio.lane === before.lane;
    this.inRow = ratio ? (same ? this.inRow + 1 : 1) : 0;
  }
}
