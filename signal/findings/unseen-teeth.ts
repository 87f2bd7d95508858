/**
 * Whether a channel's raw signal swings though its band makes no edges of it, or none that are right: too quick for the sample
 * rate, hidden by noise, or taken away by the filter. Shared by the rules that say so; it says nothing itself, but that
 * meanwhile nobody knows whether the shaft stands.
 */
import { filtersOf } from '@/signal/findings/channel-finding';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { UnseenLane } from '@/signal/findings/unseen-lane';
import type { Unseen } from '@/signal/findings/unseen-lane';
import { designFilters } from '@/signal/filter-design';

export class UnseenTeeth implements FindingRule {
  readonly latches = [];
  private readonly context: RuleContext;
  private readonly lanes: readonly (UnseenLane | null)[];

  constructor(context: RuleContext) {
    const { paths, lanes, settings, rateHz } = context;
    const isPlain = filtersOf(settings).every(({ kind }) => kind === 'none');
    const sections = isPlain ? [] : designFilters(settings.filter, rateHz);
    this.context = context;
    this.lanes = paths.map((path, index) =>
      lanes.includes(index) ? new UnseenLane(path, sections, rateHz, settings.band.mode === 'fixed') : null,
    );
  }

  /** What path `index` shows now that its band does not; null: nothing. */
  of(index: number): Unseen | null {
    return this.lanes[index]?.unseen ?? null;
  }

  /** Before all rules that take what a path has gathered since the last tick. */
  tick(nowS: number): void {
    const { motion, rateHz } = this.context;
    let isBlind = false;
    for (let k = 0; k < this.lanes.length; k++) {
      const lane = this.lanes[k];
      if (!lane) continue;
      lane.tick(nowS);
      if (lane.unseen && !lane.unseen.counts) isBlind = true;
    }
    if (isBlind) motion.doubt(Math.round(nowS * rateHz), nowS);
  }

  gap(): void {
    for (const lane of this.lanes) lane?.restart();
  }
}
