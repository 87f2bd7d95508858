import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import type { WheelLanes } from '@/signal/findings/wheel-lanes';
import type { WheelLane } from '@/signal/findings/wheel-log-reader';
import { wordsFor } from '@/signal/finding-words';
import type { WheelAbsence } from '@/signal/wheel-absence';

/** Points that accuse a tooth, and below which it is let go: three turns in a row, or every other one for long. */
const opensAt = 3;
const staysAt = 1.5;
/** On fewer positions an empty place cannot be told from a change of speed. */
const fewestPositions = 4;
/** Where more places than this share seem empty, it is not the teeth: bounce or a wrong count looks like that. */
const mostEmptyShare = 0.25;
const mostAtOnce = 4;
const shadowShare = 0.7;

/** One and the same tooth does not show, turn after turn. Starts, stops and the wheel's own gap are none of it. */
export class MissingToothRule implements FindingRule {
  readonly latches: FindingLatch[] = [];
  private readonly lanes: readonly WheelLane[];
  private readonly hasGap: boolean;
  /** By channel and position. */
  private readonly accused = new Map<string, FindingLatch>();

  constructor({ rig }: RuleContext, wheels: WheelLanes) {
    const { pulsesPerTurn, missingPulses } = rig.wheel;
    this.lanes = pulsesPerTurn < fewestPositions ? [] : wheels.lanes;
    this.hasGap = missingPulses > 0;
  }

  tick(nowS: number): void {
    for (const lane of this.lanes) if (lane.absence.suspects > 0) this.look(lane, nowS);
    for (const [key, latch] of this.accused) if (latch.rest(nowS)) this.accused.delete(key);
  }

  private look(lane: WheelLane, nowS: number): void {
    const { absence, path, counts, tracker } = lane;
    const { name } = path.channel;
    let failing = 0;
    for (const score of absence.score) if (score >= staysAt) failing++;
    if (failing > Math.max(2, mostEmptyShare * counts.length)) return;
    for (let place = 0; place < counts.length; place++) {
      const score = absence.score[place]!;
      if (score < staysAt || isShadowed(absence, place)) continue;
      const position = lane.numberOf(place);
      const key = `${name} ${position}`;
      if (score < opensAt && !this.accused.has(key)) continue;
      const latch = this.latchFor(key);
      if (!latch) continue;
      const evidence = {
        position,
        positions: counts.length,
        numbering: this.numbering(lane, counts[place]!),
        turnsMissed: absence.turns[place]!,
        toothS: tracker.pitchS,
      };
      latch.raise(
        {
          code: 'missing-tooth',
          channel: name,
          from: absence.sinceS[place]!,
          severity: 'fault',
          outcome: 'found',
          at: absence.missedS[place]!,
          evidence,
          ...wordsFor('missing-tooth', name, evidence),
          causedBy: null,
        },
        nowS,
      );
    }
  }

  /** A tooth beside a gap, or a gap as wide as the wheel's own, that was there from the start: it may be the other one. */
  private numbering({ numbering }: WheelLane, timesSeen: number): string {
    return this.hasGap && timesSeen === 0 ? 'from the gap, since it went missing' : numbering;
  }

  private latchFor(key: string): FindingLatch | null {
    const old = this.accused.get(key);
    if (old) return old;
    if (this.accused.size >= mostAtOnce) return null;
    const free = this.latches.find((latch) => !latch.open) ?? new FindingLatch(2);
    if (!this.latches.includes(free)) this.latches.push(free);
    this.accused.set(key, free);
    return free;
  }
}

/** Where a tooth is gone, noise may take the next flank away now and then: the neighbour fails far more often. */
function isShadowed({ turns, score }: WheelAbsence, place: number): boolean {
  const { length } = score;
  for (const neighbour of [(place + 1) % length, (place + length - 1) % length])
    if (score[neighbour]! >= staysAt && turns[place]! < shadowShare * turns[neighbour]!) return true;
  return false;
}
