import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { wordsFor } from '@/signal/finding-words';

/** A tooth is accused only after so many turns in a row. */
const turnsNeeded = 3;
/** Below this many positions an empty place cannot be told from a change of speed. */
const fewestPositions = 6;
/** Where more places than this share seem empty, it is not the teeth: bounce or a wrong count looks like that. */
const mostEmptyShare = 0.25;
const mostAtOnce = 4;

/** One and the same tooth does not show, turn after turn. Starts, stops and the wheel's own gap are none of it. */
export class MissingToothRule implements FindingRule {
  readonly latches: FindingLatch[] = [];
  private readonly context: RuleContext;
  private readonly accused = new Map<number, FindingLatch>();

  constructor(context: RuleContext) {
    this.context = context;
  }

  tick(nowS: number): void {
    const { motion, paths, primary, rig } = this.context;
    const { face, sync } = motion.train;
    if (!face || rig.wheel.pulsesPerTurn < fewestPositions) return;
    let empty = 0;
    for (let position = 0; position < face.missedInRow.length; position++) {
      if (face.missedInRow[position]! > 0) empty++;
    }
    const credible = empty <= Math.max(1, mostEmptyShare * rig.wheel.pulsesPerTurn);
    for (let position = 0; credible && position < face.missedInRow.length; position++) {
      const turns = face.missedInRow[position]!;
      if (turns < turnsNeeded) continue;
      const latch = this.latchFor(position);
      if (!latch) continue;
      const path = paths[primary]!;
      const seenS = face.lastSeenS[position]!;
      const evidence = {
        position,
        numbering: sync.missing > 0 ? 'fixed to the wheel' : 'relative',
        turnsMissed: turns,
      };
      latch.raise(
        {
          code: 'missing-tooth',
          channel: path.channel.name,
          from: seenS,
          severity: 'fault',
          outcome: 'found',
          at: seenS,
          evidence,
          ...wordsFor('missing-tooth', path.channel.name, evidence),
          causedBy: null,
        },
        nowS,
      );
    }
    for (const [position, latch] of this.accused) if (latch.rest(nowS)) this.accused.delete(position);
  }

  private latchFor(position: number): FindingLatch | null {
    const old = this.accused.get(position);
    if (old) return old;
    if (this.accused.size >= mostAtOnce) return null;
    const free = this.latches.find((latch) => !latch.open) ?? new FindingLatch(2);
    if (!this.latches.includes(free)) this.latches.push(free);
    this.accused.set(position, free);
    return free;
  }
}
