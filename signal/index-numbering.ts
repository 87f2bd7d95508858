/**
 * Fixes the numbers of the wheel's teeth to the index: number 0 is the first tooth after the index's leading flank, turning
 * forward. Turning in reverse the flanks come in the other order, so that there the index and the teeth are told by where
 * they end.
 *
 * Where that flank stands close to a tooth, jitter would make now the one and now the other tooth the first: a number that
 * was given stays unless it is off by more than half a pitch.
 */
import type { Motion } from '@/signal/motion';
import type { ToothLog } from '@/signal/tooth-log';
import type { WheelFaceMeter } from '@/signal/wheel-face-meter';

export class IndexNumbering {
  private readonly motion: Motion;
  private readonly teeth: ToothLog;
  private readonly index: ToothLog;
  /** An index pulse whose first tooth is not placed yet; -1: none. */
  private pending = -1;

  constructor(motion: Motion, teeth: ToothLog, index: ToothLog) {
    this.motion = motion;
    this.teeth = teeth;
    this.index = index;
  }

  /** Index pulse `n` of its log has come. */
  note(n: number): void {
    this.pending = n;
  }

  tick(): void {
    const { motion, index, pending } = this;
    const { face } = motion.train;
    if (pending < 0 || !face || face.missing > 0 || !face.isKnown) return;
    const atS = (this.byEnds ? index.fallS : index.riseS)[pending & index.mask]!;
    if (pending < index.count - index.length || atS < motion.sameWaySinceS) {
      this.pending = -1;
      return;
    }
    if (this.number(face, atS)) this.pending = -1;
  }

  private get byEnds(): boolean {
    return this.motion.reversed && this.motion.widths === null;
  }

  /** @returns false while the tooth after `atS` has not come, or has no place yet. */
  private number(face: WheelFaceMeter, atS: number): boolean {
    const { teeth, motion } = this;
    // Pulses of coded width are teeth by their leading edges, whichever way those go.
    const starts = motion.widths && !motion.widths.leadRises ? teeth.fallS : teeth.riseS;
    const flanks = this.byEnds ? teeth.fallS : starts;
    let n = teeth.count;
    while (n > Math.max(0, teeth.count - teeth.length) && !(flanks[(n - 1) & teeth.mask]! <= atS)) n--;
    const nextS = flanks[n & teeth.mask]!;
    if (n === teeth.count || !(nextS > atS)) return false;
    const position = placedAt(face, starts[n & teeth.mask]!);
    if (position < 0) return false;
    const lastS = flanks[(n - 1) & teeth.mask]!;
    const share = (atS - lastS) / (nextS - lastS);
    const off = face.isNumbered ? face.aheadOfFirst(position) : NaN;
    if (off === 0 || (off === 1 && share < 0.5) || (off === -1 && share > 0.5)) return true;
    face.numberFrom(position);
    return true;
  }
}

/** Position of the tooth that came at `t`; -1 where none did. */
function placedAt({ seenS }: WheelFaceMeter, t: number): number {
  return seenS.indexOf(t);
}
