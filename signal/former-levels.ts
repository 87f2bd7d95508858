/**
 * The levels that were known before a hunt found smaller ones. On a shaft that may turn to and fro the smaller swing may be no
 * more than shaking with a tooth's top before the sensor: once a tooth comes as far as they did, they hold again.
 */
import type { Levels } from '@/signal/levels';

/** Far smaller than before, share of the swing. */
const smallShare = 0.6;
/** As far as before, but for so much of that swing. */
const reachShare = 0.25;
/** Edges of the smaller swing, and what was before is gone for good. */
const patience = 200;

export class FormerLevels {
  // Numbers begin as fractions: a field that was ever a whole number changes its layout later.
  private lowV = NaN;
  private highV = NaN;
  private smallLowV = NaN;
  private smallHighV = NaN;
  private left = 0;

  /** `levels` are about to become `lowV` and `highV`. */
  keep(levels: Levels, lowV: number, highV: number): void {
    // What was small itself hides nothing of what was before that.
    if (this.left === 0) {
      this.lowV = levels.lowV;
      this.highV = levels.highV;
    }
    this.left = highV - lowV < smallShare * (this.highV - this.lowV) ? patience : 0;
    this.smallLowV = lowV;
    this.smallHighV = highV;
  }

  /** An edge's trough (`rising`) or peak, V. @returns true where `levels` are those of before again. */
  isBack(levels: Levels, rising: boolean, extremeV: number): boolean {
    if (this.left === 0) return false;
    this.left--;
    const nearV = reachShare * (this.highV - this.lowV);
    const isBack = rising
      ? extremeV < this.lowV + nearV && extremeV < this.smallLowV - nearV
      : extremeV > this.highV - nearV && extremeV > this.smallHighV + nearV;
    if (!isBack) return false;
    levels.lowV = this.lowV;
    levels.highV = this.highV;
    this.left = 0;
    return true;
  }
}
