/**
 * How far successive whole turns, slid on by a tooth each, disagree: what noise and jitter do to a turn, where the wheel's
 * own unevenness cancels.
 *
 * From one turn C to the next, a tooth later, q = (C[k] - C[k-1]) / (t[k] - t[k-1]) is by how much the shaft is slower
 * now than a turn ago, whatever the pitch. It changes little from tooth to tooth; by edges that are off by s, where k - 1
 * and k lie m, k - 2 and k - 1 lie n positions apart, q[k] - q[k-1] has the variance 2 s^2 (1/m^2 + (1/m + 1/n)^2 + 1/n^2).
 */
import { smallSample } from '@/signal/speed-scatter';
import type { SpeedScatter } from '@/signal/speed-scatter';

const keptWeight = 8;
const shortestMemory = 48;
const longestMemory = 512;
const outlier = 5;
export class TurnScatter {
  /** For the caller to write before `note`: a turn's duration, when it ended, s, and the positions since the one before. */
  turnS = NaN;
  endS = NaN;
  spans = NaN;
  /** As `EndPaces`: a shaft that speeds up makes the older edges count for more. */
  growth = 1;
  /** Variance of an edge by noise and sample grid, positions squared; NaN: not known. */
  told = NaN;
  /** Variance of one edge, positions squared, wide enough for what little it may come from; NaN before the first turn. */
  variance = NaN;
  private readonly fading: number;
  private sum = 0;
  private weight = 0;
  private lastTurnS = NaN;
  private lastEndS = NaN;
  private lastChange = NaN;
  private lastPer = NaN;
  private lastEdges = 0;

  constructor(turnPositions: number) {
    this.fading = 1 - 1 / Math.min(longestMemory, Math.max(shortestMemory, 2 * turnPositions));
  }

  /** The turns in a row end: nothing is held against the ones before. */
  interrupt(): void {
    this.lastTurnS = this.lastEndS = this.lastChange = NaN;
  }

  /** Stop, gap or reversal: the noise need not be the same. */
  loosen(): void {
    this.interrupt();
    if (!(this.weight > keptWeight)) return;
    this.sum *= keptWeight / this.weight;
    this.weight = keptWeight;
  }

  /**
   * Takes the next turn.
   * @param edges its variance in variances of an edge: 2, or 1 where falling edges are in it.
   * @param scatter stands in where nothing is told.
   */
  note(edges: number, scatter: SpeedScatter): void {
    if (this.weight === 0) {
      this.sum = keptWeight * (this.told > 0 ? this.told : scatter.variance);
      this.weight = keptWeight;
    }
    if (edges !== this.lastEdges) this.interrupt();
    this.lastEdges = edges;
    const per = 1 / this.spans;
    const change = (this.turnS - this.lastTurnS) / (this.endS - this.lastEndS);
    const off = change - this.lastChange;
    const share = per * per + (per + this.lastPer) ** 2 + this.lastPer * this.lastPer;
    const square = (off * off) / (edges * share * this.growth);
    this.lastTurnS = this.turnS;
    this.lastEndS = this.endS;
    this.lastChange = change;
    this.lastPer = per;
    if (square < Infinity) {
      this.sum = this.sum * this.fading + Math.min(square, (outlier * outlier * this.sum) / this.weight);
      this.weight = this.weight * this.fading + 1;
    }
    const factor = smallSample(1 + this.weight / 2);
    this.variance = (factor * factor * this.sum) / this.weight;
  }
}
