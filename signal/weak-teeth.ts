/**
 * Teeth that the band did not count, found in the stretch between two edges once the second one has come late.
 *
 * A bump is a tooth where it stands clear of the noise (12 sigmas, four quanta), by at least a fifth of the usual swing or so
 * (`leastToothV`), at a
 * place where a tooth was due: the interval of the band's own edges, divided by the usual one, says how many places lie
 * in it. Where all intervals are alike, as on a wheel whose every second tooth is weak, bumps must divide the interval
 * evenly and be of the counted teeth's own width.
 */
import { Stretch } from '@/signal/stretch';
import { leastQuanta, leastSigmas, leastToothV } from '@/signal/tooth-size';

/** An interval is long from so many usual ones on. */
export const longShare = 1.5;
const mostPlaces = 32;
/** What is less beside the swing is not even looked at. */
const bumpShare = 0.1;
/** How far from its place a tooth may stand, share of the spacing; more closely where only evenness proves it. */
const offPlace = 0.3;
const offEven = 0.15;
/** Pulses wider than this share of the spacing are no pulses between which another one could hide. */
const widestPulse = 0.7;
const widthRatio = 1.75;
const evenShare = 0.7;
/** A second gap within this share of a turn is none. */
const sameTurn = 0.75;

export class WeakTeeth {
  // What `look` is to look at: numbers passed to a function that is not inlined are boxed.
  /** The edge before (of the other polarity) and the one at hand, samples. */
  beforeAt = NaN;
  at = NaN;
  /** Mid crossing of the edge at hand, and of the last ones of its polarity and of the other, samples. */
  midAt = NaN;
  sameMidAt = NaN;
  otherMidAt = NaN;
  typicalSamples = NaN;
  swingV = NaN;
  noiseV = NaN;
  quantumV = NaN;
  /** Teeth counted so far. */
  toothCount = 0;

  /** Weak teeth found. */
  count = 0;
  /** The weakest one's peak (up) or trough, V. */
  weakestV = NaN;
  /** The worst that the signal came back to between teeth, V. */
  returnV = NaN;
  /** The most that a bump came to which is no tooth, V; NaN: there is none. */
  lobeV = NaN;
  /** Long interval: the least that the signal came to at a place where a tooth was due; NaN: not looked at. */
  emptyV = NaN;
  private readonly stretch = new Stretch();
  private readonly teethPerTurn: number;
  private readonly missing: number;
  private gapSeenAt = -Infinity;

  /** @param missing teeth that the wheel lacks in a row. */
  constructor(teethPerTurn: number, missing: number) {
    this.teethPerTurn = teethPerTurn;
    this.missing = missing;
  }

  /**
   * Looks through the stretch, whose samples are in `v` (`v[j]` is sample `base + j`).
   * @param rising the edge at hand is: bumps are peaks, else troughs.
   */
  look(v: Float64Array, base: number, rising: boolean): void {
    this.count = 0;
    this.lobeV = this.weakestV = this.emptyV = NaN;
    const { stretch, swingV, noiseV, quantumV } = this;
    const intervalAt = this.midAt - this.sameMidAt;
    const long = intervalAt > longShare * this.typicalSamples;
    const places = Math.round(intervalAt / this.typicalSamples);
    const clearV = Math.max(leastSigmas * noiseV, leastQuanta * quantumV);
    // NaN where the noise is not known.
    if (!(clearV >= 0) || !(swingV > 0) || (long && places > mostPlaces)) return;
    const from = Math.ceil(this.beforeAt - base);
    const to = Math.floor(this.at - base);
    stretch.search(v, from, to, base, rising, Math.max(clearV, bumpShare * swingV));
    this.returnV = stretch.returnV;
    if (long) {
      this.judgePlaces(places, intervalAt / places, rising);
      // The usual interval may not be known well yet.
      if (this.count === 0 && this.missing === 0) this.judgeEvenness(intervalAt, rising);
      this.emptyV = this.emptiest(v, base, places, intervalAt / places, rising);
    } else {
      this.judgeEvenness(intervalAt, rising);
    }
  }

  /**
   * Where a hunt has found levels, in what is remembered of it: `v[from..to]`. Peaks that stand out are teeth where none comes
   * much sooner after the one before than the others do, and where all are about as wide, as the troughs between them are.
   * @returns true where `weakestV` and `returnV` hold the lowest peak and the highest trough of them.
   */
  survey(v: Float64Array, from: number, to: number): boolean {
    const { stretch, noiseV, quantumV } = this;
    const leastV = leastToothV(this.swingV, noiseV);
    const clearV = Math.max(leastSigmas * noiseV, leastQuanta * quantumV, leastV);
    if (!(clearV > 0)) return false;
    stretch.search(v, from, to, 0, false, clearV);
    if (!this.isEven()) return false;
    stretch.search(v, from, to, 0, true, clearV);
    if (!this.isEven()) return false;
    this.weakestV = Infinity;
    for (let k = 0; k < stretch.count; k++) this.weakestV = Math.min(this.weakestV, stretch.extremeV[k]!);
    // It may begin half way up a flank.
    this.returnV = stretch.troughV();
    return true;
  }

  /** Three bumps or more, none much closer to the next than the others are, and all about as wide. */
  private isEven(): boolean {
    const { at, widthSamples, count } = this.stretch;
    let shortest = Infinity;
    let longest = 0;
    let secondLongest = 0;
    let narrowest = Infinity;
    let widest = 0;
    for (let k = 1; k < count; k++) {
      const spacing = at[k]! - at[k - 1]!;
      shortest = Math.min(shortest, spacing);
      if (spacing > longest) {
        secondLongest = longest;
        longest = spacing;
      } else if (spacing > secondLongest) {
        secondLongest = spacing;
      }
      narrowest = Math.min(narrowest, widthSamples[k]!);
      // The last one may be a wheel's gap, as the longest spacing may.
      if (k < count - 1) widest = Math.max(widest, widthSamples[k]!);
    }
    return count > 2 && shortest >= evenShare * secondLongest && widest <= widthRatio * narrowest;
  }

  private get middle(): number {
    return (this.sameMidAt + this.otherMidAt) / 2;
  }

  private judgePlaces(places: number, spacing: number, up: boolean): void {
    const { stretch, middle } = this;
    const leastV = leastToothV(this.swingV, this.noiseV);
    let last = 0;
    for (let k = 0; k < stretch.count; k++) {
      const place = (stretch.at[k]! - middle) / spacing;
      const whole = Math.round(place);
      const isDue = whole > last && whole < places && Math.abs(place - whole) <= offPlace;
      if (stretch.heightV[k]! < leastV) {
        this.takeLobe(stretch.extremeV[k]!, up);
        stretch.heightV[k] = 0;
      } else if (isDue) {
        last = whole;
      } else {
        stretch.heightV[k] = 0;
      }
    }
    // A wheel's gap holds none, whatever stands in it.
    for (let left = places - 1 - this.gapPlaces(places); left > 0; left--) {
      let highest = -1;
      for (let k = 0; k < stretch.count; k++)
        if (stretch.heightV[k]! > (highest < 0 ? 0 : stretch.heightV[highest]!)) highest = k;
      if (highest < 0) return;
      this.takeTooth(stretch.extremeV[highest]!, up);
      stretch.heightV[highest] = 0;
    }
  }

  /** Of the places in a long interval, those that are the wheel's gap: it comes once a turn. */
  private gapPlaces(places: number): number {
    const { missing, teethPerTurn } = this;
    if (missing === 0) return 0;
    const since = this.toothCount - this.gapSeenAt;
    if (places === missing + 1 && since > 0 && since < sameTurn * teethPerTurn) return 0;
    if (places > missing) this.gapSeenAt = this.toothCount;
    return missing;
  }

  private judgeEvenness(interval: number, up: boolean): void {
    const { stretch, middle } = this;
    const leastV = leastToothV(this.swingV, this.noiseV);
    const pulse = this.otherMidAt - this.sameMidAt;
    let teeth = 0;
    for (let k = 0; k < stretch.count; k++) if (stretch.heightV[k]! >= leastV) teeth++;
    const spacing = interval / (teeth + 1);
    let isEven = teeth > 0 && teeth < this.teethPerTurn && pulse <= widestPulse * spacing;
    let place = 0;
    for (let k = 0; k < stretch.count && isEven; k++) {
      if (stretch.heightV[k]! < leastV) continue;
      place++;
      const width = stretch.widthSamples[k]!;
      if (Math.abs((stretch.at[k]! - middle) / spacing - place) > offEven) isEven = false;
      if (width > widthRatio * pulse || pulse > widthRatio * width) isEven = false;
    }
    if (!isEven) return;
    for (let k = 0; k < stretch.count; k++) {
      if (stretch.heightV[k]! < leastV) this.takeLobe(stretch.extremeV[k]!, up);
      else this.takeTooth(stretch.extremeV[k]!, up);
    }
  }

  private takeTooth(extremeV: number, up: boolean): void {
    if (this.count++ === 0 || (up ? extremeV < this.weakestV : extremeV > this.weakestV))
      this.weakestV = extremeV;
  }

  private takeLobe(extremeV: number, up: boolean): void {
    if (Number.isNaN(this.lobeV) || (up ? extremeV > this.lobeV : extremeV < this.lobeV))
      this.lobeV = extremeV;
  }

  private emptiest(v: Float64Array, base: number, places: number, spacing: number, up: boolean): number {
    const { stretch, middle } = this;
    let worst = NaN;
    for (let place = 1; place < places; place++) {
      const about = middle + place * spacing - base;
      const from = Math.max(Math.ceil(about - offPlace * spacing), Math.ceil(this.beforeAt - base));
      const to = Math.min(Math.floor(about + offPlace * spacing), Math.floor(this.at - base));
      const reached = stretch.reachV(v, from, to, up);
      if (!Number.isFinite(reached)) continue;
      if (Number.isNaN(worst) || (up ? reached < worst : reached > worst)) worst = reached;
    }
    return worst;
  }
}
