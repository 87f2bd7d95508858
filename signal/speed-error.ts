/**
 * The standard error of a speed, as a share of it, from what was measured of the teeth (`speed-scatter.ts`,
 * `turn-scatter.ts`): two of it hold the true mean speed of the same interval in at least 95 % of cases.
 *
 * Teeth off their places by s each, in positions: sqrt(2) s / K between two that are K positions apart, s / sqrt(S) for
 * the slope of a line through teeth whose places have the sum of squares S about their mean (K + 1 in a row:
 * s sqrt(12 / (K (K + 1) (K + 2)))). Over more than a turn the same teeth come again with the same offsets: then theirs is
 * sum over positions k of (sum over turns r of w[r,k])^2, w the line's weights, and only the noise is as above.
 */
import { EndPaces } from '@/signal/end-paces';
import { SpeedScatter } from '@/signal/speed-scatter';
import type { SpeedRing } from '@/signal/speed-ring';
import type { TurnScatter } from '@/signal/turn-scatter';
import type { WindowLine } from '@/signal/window-line';

/**
 * Neighbouring edges are off alike where a filter is narrow, and neighbouring teeth where they were cut so: third differences
 * then see a little less than what intervals are off by.
 */
const margin = 1.2;
const marginOfTurn = 1.1;
/**
 * Edges that drift slowly against their places (a wheel in step with the sample grid, noise that a filter has slowed down)
 * hardly disagree from one tooth to the next and still do so over a stretch: so much of the variance that noise and
 * grid tell of an edge is held to, whatever was measured. In a turn the grid moves rising and falling edges alike; where
 * turns hardly disagree at all, a few are off by nearly a whole sample and the rest by little.
 */
const leastTold = 0.64;
const toldOfTurn = 1.5;
const inStep = 0.25;
const toldInStep = 2.7;
const offOfLine = 1.39 / 1.2;
/** A change of speed within a window is believed where chance would make it this many standard errors only once in 400 times. */
const believed = 3;
/** Ends and line disagree by more than so many standard errors by chance only once in nine times. */
const byChance = 1.6;
/** What a line is off by on an even acceleration is taken off; so much of it stays in doubt. */
const bentDoubt = 0.1;

export class SpeedError {
  readonly scatter: SpeedScatter;
  /** Standard error of the newest tooth as noise and sample grid tell it, s; NaN: not known. */
  sigmaS = NaN;
  /** Of the newest tooth what the line between two samples makes, rms, s, where there is one, and samples a second. */
  gridS = 0;
  rateHz = NaN;
  /** Time for one position, s. */
  perPositionS = NaN;
  /** Unevenness too slow from tooth to tooth to be seen in the scatter: variance of the share by which a pitch is off. */
  hidden = 0;
  /** Positions by which a turn may be miscounted, for want of a sync that should be there. */
  unproven = 0;
  /** The standard error as a share of the speed. */
  share = NaN;
  /** By what share time for a position is longer than the line's slope, its bend considered. */
  bent = 0;
  readonly ends: EndPaces;
  private readonly ring: SpeedRing;
  private readonly positions: number;

  constructor(ring: SpeedRing, positions: number) {
    this.ring = ring;
    this.positions = positions;
    this.scatter = new SpeedScatter(ring, positions);
    this.ends = new EndPaces(ring);
  }

  /** Variance of an edge as it is told, positions squared. */
  get told(): number {
    const share = this.sigmaS / this.ends.lastS;
    return share * share;
  }

  /** Of a speed from the entry `from` to the newest. */
  ofEnds(from: number): void {
    const { ring, positions, scatter } = this;
    const { marks, mask } = ring;
    const spans = marks[(ring.next - 1) & mask]! - marks[from & mask]!;
    const isLong = spans >= 2.5;
    let tooth = scatter.variance;
    if (isLong || scatter.isIgnorant) {
      const { told } = this;
      if (told > 0) tooth += told * scatter.ignorance;
      if (isLong && leastTold * told > tooth) tooth = leastTold * told;
    }
    // What is uneven once a turn cancels over a whole one.
    const part = Math.max(0, 1 - (spans / positions) ** 2);
    const { ends } = this;
    ends.measure(from, this.perPositionS);
    let square = (ends.sum * tooth) / (spans * spans) + this.hidden * part;
    square += this.doubted(from, spans);
    square += this.ofGrid(ring.times[(ring.next - 1) & mask]! - ring.times[from & mask]!);
    this.share = margin * Math.sqrt(square);
  }

  /**
   * What the sample grid adds to the square over a stretch of `seconds`. Edges that lie alike between two samples are off
   * alike, so that no disagreement shows it: over d samples both ends differ by about 2 sin(pi d) of what one is off, rms,
   * which is 8 x (1 - x) for the way x to the next whole number of samples (within 6 %, and quicker).
   */
  private ofGrid(seconds: number): number {
    const { gridS, rateHz } = this;
    if (!(gridS > 0)) return 0;
    const samples = seconds * rateHz;
    const way = Math.abs(samples - Math.round(samples));
    const off = (8 * way * (1 - way) * gridS) / seconds;
    return off * off;
  }

  /**
   * The same for the slope of a line over `spans` positions: as they drift through the grid by d samples in all it is
   * bent by up to twice the most that an edge is off (1.39 of its rms), by less the more often they pass through it.
   */
  private ofGridAlong(seconds: number, spans: number): number {
    const { gridS, rateHz } = this;
    if (!(gridS > 0)) return 0;
    const perPosition = (seconds / spans) * rateHz;
    const drift = spans * Math.abs(perPosition - Math.round(perPosition));
    const reach = drift < 0.5 ? 4 * drift * (1 - drift) : Math.min(1, 1 / drift);
    const off = (offOfLine * reach * gridS) / seconds;
    return off * off;
  }

  /** What a tooth far off its place, or one too many or too few, adds to the square. */
  private doubted(from: number, spans: number): number {
    const { scatter } = this;
    if (scatter.doubtAt < from) return 0;
    const off = spans > 1 && scatter.isSlip ? Math.max(1, scatter.doubt) : scatter.doubt;
    return (off / spans) ** 2;
  }

  /** Of a whole turn that begins with the entry `from`. @param edges its variance in variances of an edge. */
  ofTurn(from: number, edges: number, turns: TurnScatter): void {
    const { positions, scatter, told, ends } = this;
    const { variance } = turns;
    let edge = marginOfTurn * marginOfTurn * edges * variance;
    if (told > 0) edge = Math.max(edge, (variance < inStep * told ? toldInStep : toldOfTurn) * told);
    let square = (edge * ends.sum) / (2 * positions * positions);
    square += this.ofGrid(turns.turnS);
    if (scatter.isSlip) square += this.doubted(from, positions);
    if (this.unproven > 0) square += (this.unproven / positions) ** 2;
    this.share = Math.sqrt(square);
  }

  /**
   * Of the slope of a line, beside which the ends make `endsS` of a position.
   * @param turns where the line covers more than a turn.
   */
  ofLine(line: WindowLine, turns: TurnScatter | null, endsS: number): void {
    const { ring, positions, scatter, told } = this;
    const { places, mask } = ring;
    const { spread } = line;
    const spans = places[(ring.next - 1) & mask]! - places[line.from & mask]!;
    let tooth = scatter.variance;
    if (told > 0) tooth = Math.max(tooth + told * scatter.ignorance, leastTold * told);
    let square = tooth / spread;
    if (turns && turns.variance < tooth) {
      const wheel = tooth - turns.variance;
      square = turns.variance / spread + (wheel * repeated(spans, positions)) / (spread * spread);
    }
    const turned = (Math.PI * spans) / positions;
    const slow = Math.min(1, 3 / (turned * turned));
    square += this.hidden * slow * slow;
    this.findBend(line.from, tooth, spans);
    square += (bentDoubt * this.bent) ** 2;
    // Where the ends still disagree by more than chance, the speed did not change evenly.
    const disagreed = endsS / line.perPositionS - 1 - this.bent;
    const chance = tooth * (2 / (spans * spans) - 1 / spread);
    if (disagreed * disagreed > byChance * byChance * chance) square += disagreed * disagreed - chance;
    square += this.doubted(line.from, spans);
    square += this.ofGridAlong(line.perPositionS * spans, spans);
    if (this.unproven > 0 && spans >= positions) square += (this.unproven / positions) ** 2;
    this.share = margin * Math.sqrt(square);
  }

  /**
   * Time over place is no straight line on a shaft that speeds up or slows down: with half the positions passed in a share
   * (1 + r) / 2 of the time, the mean time for one is longer than the line's slope by 0.8 r^2 (series for an even
   * acceleration; with the next term as fitted to a start from rest, r = 0.414, where it is 1/4).
   */
  private findBend(from: number, tooth: number, spans: number): void {
    const { times, marks, mask, next } = this.ring;
    const a = from & mask;
    const m = ((from + next - 1) >> 1) & mask;
    const b = (next - 1) & mask;
    const first = (times[m]! - times[a]!) / (marks[m]! - marks[a]!);
    const second = (times[b]! - times[m]!) / (marks[b]! - marks[m]!);
    const change = (first - second) / (first + second);
    const square = change * change;
    const chance = (6 * tooth) / (spans * spans);
    this.bent = square > believed * believed * chance ? square * (0.8 + 3.85 * square) : 0;
  }
}

/** Sum over the wheel's positions of the square of their weights' sum over turns, places being the weights, in a row of `spans` + 1. */
function repeated(spans: number, positions: number): number {
  const count = spans + 1;
  const turns = Math.floor(count / positions);
  const more = count - turns * positions;
  const less = positions - more;
  const moreMean = (more - 1 + positions * turns - spans) / 2;
  const lessMean = (more + positions - 1 + positions * (turns - 1) - spans) / 2;
  return (
    (turns + 1) ** 2 * more * (moreMean ** 2 + (more ** 2 - 1) / 12) +
    turns ** 2 * less * (lessMean ** 2 + (less ** 2 - 1) / 12)
  );
}
