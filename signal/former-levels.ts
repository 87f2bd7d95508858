/**
 * The levels of whole teeth, for a channel of a shaft that may turn to and fro: one that shakes cuts peaks short, a band that
 * has found nothing else follows them, and is off to one side. Once a peak or trough comes as far as those of whole teeth
 * did, theirs are the levels again.
 */
import type { Levels } from '@/signal/levels';
import { strongShare } from '@/signal/tooth-size';

/** Edges of full swing in a row that are whole teeth; and where they swing less than whole ones did. */
const fewWhole = 8;
const manyWhole = 64;
const asLarge = 0.9;
/** Far smaller ones never are, share of the swing, */
const farSmaller = 0.75;
/** unless nothing else has come for so many edges. */
const patience = 1000;
/** As far as whole teeth, but for so much of their swing. */
const near = 0.25;

export class FormerLevels {
  // Numbers begin as fractions: a field that was ever a whole number changes its layout later.
  private lowV = NaN;
  private highV = NaN;
  private row = 0;
  private idle = 0;

  /**
   * An edge that `levels` have followed: its trough (`rising`) or peak, and how far that is from the last one, V.
   * @returns true where `levels` are those of whole teeth again.
   */
  isBack(levels: Levels, rising: boolean, extremeV: number, toothV: number): boolean {
    const wholeV = this.highV - this.lowV;
    const nearV = near * wholeV;
    const isBack = rising
      ? extremeV < this.lowV + nearV && levels.lowV > this.lowV + nearV
      : extremeV > this.highV - nearV && levels.highV < this.highV - nearV;
    if (isBack) {
      levels.lowV = this.lowV;
      levels.highV = this.highV;
      this.row = this.idle = 0;
    } else {
      this.learn(levels, toothV, wholeV);
    }
    return isBack;
  }

  private learn(levels: Levels, toothV: number, wholeV: number): void {
    const swingV = levels.highV - levels.lowV;
    const isKnown = wholeV > 0 && this.idle < patience;
    this.idle++;
    this.row =
      toothV >= strongShare * swingV && !(isKnown && swingV < farSmaller * wholeV) ? this.row + 1 : 0;
    if (this.row < (isKnown && swingV < asLarge * wholeV ? manyWhole : fewWhole)) return;
    this.lowV = levels.lowV;
    this.highV = levels.highV;
    this.idle = 0;
  }
}
