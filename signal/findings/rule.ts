/**
 * What a rule of findings is: it looks at what the channels and the motion have learnt, at ticks (fixed places of the
 * stream, 10 a second or more) and at gaps, and holds its own findings. Rules know nothing of each other.
 */
import type { ChannelPath } from '@/signal/channel-path';
import type { IndexWatch } from '@/signal/index-watch';
import type { Motion } from '@/signal/motion';
import type { Finding, RigSetup, Settings } from '@/signal/model';
import type { BoardNote } from '@/signal/pipeline-types';

export type RuleContext = {
  rig: RigSetup;
  settings: Settings;
  rateHz: number;
  paths: readonly ChannelPath[];
  motion: Motion;
  /** Index into `paths` of the channel that speed comes from. */
  primary: number;
  /** Indices into `paths` of the arrangement's channels (A, B or U, V, W), in its order. */
  lanes: readonly number[];
  /** Index into `paths` of the index channel Z; -1: there is none. */
  index: number;
  /** Counts a turn, held against the index; null without one. */
  indexWatch: IndexWatch | null;
  /** So long after a start the filter still rings, s. */
  settleS: number;
};

export type RuleGap = { fromS: number; toS: number; lostSamples: number; estimated: boolean };

export interface FindingRule {
  /** @param nowS stream time of the tick. */
  tick(nowS: number): void;
  gap?(gap: RuleGap): void;
  note?(note: BoardNote, nowS: number): void;
  readonly latches: readonly FindingLatch[];
}

/**
 * One finding that opens, lasts and closes: it stays for `holdS` after its cause was last seen, so that it does not
 * flicker, and then ends at the instant of that last sight.
 */
export class FindingLatch {
  open: Finding | null = null;
  closed: Finding[] = [];
  private lastSeenS = -Infinity;
  private readonly holdS: number;

  constructor(holdS: number) {
    this.holdS = holdS;
  }

  /** The cause is there now. Begin and place to look at stay as they were when it opened. */
  raise(finding: Omit<Finding, 'to'>, seenS: number): void {
    this.lastSeenS = seenS;
    this.open = this.open
      ? {
          ...finding,
          from: this.open.from,
          at: this.open.at,
          causedBy: this.open.causedBy ?? finding.causedBy,
          to: null,
        }
      : { ...finding, to: null };
  }

  /**
   * @param looksS time between two looks at the cause, where that can be long: the next one is waited for.
   * @returns true where it was closed by this call.
   */
  rest(nowS: number, looksS = 0): boolean {
    if (!this.open || nowS - this.lastSeenS < Math.max(this.holdS, 1.5 * looksS)) return false;
    this.closed.push({ ...this.open, to: Math.max(this.open.from, this.lastSeenS) });
    this.open = null;
    return true;
  }
}
