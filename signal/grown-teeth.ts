/**
 * Notices teeth that are far larger than what was taken for teeth until now: hum or idle noise that stood there before the
 * wheel began to turn, or a tooth's small neighbour. Three of one size are believed, where one or two may be spikes.
 */
import type { Levels } from '@/signal/levels';

const grownShare = 2.5;
const alike = 0.6;
const believed = 3;
/** Counted teeth, small ones too, within which they must come. */
const patience = 200;

export class GrownTeeth {
  private count = 0;
  // Numbers begin as fractions: a field that was ever a whole number changes its layout later.
  private heightV = NaN;
  private peakV = NaN;
  private troughV = NaN;
  private firstAt = -Infinity;

  /**
   * A counted peak and the trough before it, V.
   * @param toothCount teeth counted so far. @returns true where three of one size have come: `levels` are then theirs.
   */
  note(levels: Levels, peakV: number, troughV: number, toothCount: number): boolean {
    const heightV = peakV - troughV;
    if (!(heightV > grownShare * (levels.highV - levels.lowV))) return false;
    const least = Math.min(heightV, this.heightV);
    const isLike = least >= alike * Math.max(heightV, this.heightV);
    if (!isLike || toothCount - this.firstAt > patience) {
      this.count = 0;
      this.peakV = 0;
      this.troughV = 0;
      this.firstAt = toothCount;
    }
    this.count++;
    this.heightV = heightV;
    this.peakV += peakV;
    this.troughV += troughV;
    if (this.count < believed) return false;
    levels.highV = this.peakV / this.count;
    levels.lowV = this.troughV / this.count;
    this.heightV = NaN;
    return true;
  }
}
