/**
 * The eye of a fitted band: what lies free between the lowest peak and the highest trough of the last turn, so that a band
 * inside it counts the weakest tooth as well as the strongest.
 *
 * Teeth of the last turn are read from the log, eight at least. What is less than four fifths of the usual swing is a tooth
 * only where it stands in the teeth's rhythm: a bounce or a bump just across the band would else pull the band towards it,
 * and so invite the next, as would a peak that a reversal cuts short. Teeth are taken from the newest back, as far as the eye stays open by a share of the usual swing: what
 * lies before a step, or is no more than ripple beside the teeth, is left out. A straight drift is taken off where that
 * leaves more room.
 */
import type { Levels } from '@/signal/levels';
import { fitDrift } from '@/signal/tooth-drift';
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';
import type { ToothProof } from '@/signal/tooth-proof';
import { leastAverageV, leastSigmas, leastToothV, strongShare } from '@/signal/tooth-size';

const manyWeak = 8;
/** An eye that would be narrower, share of the usual swing, is the mark of a step or a drift. */
const closedShare = 0.12;
const fewestTeeth = 8;
const fewestForDrift = 4;
/** With drift taken off, it lies no further outside of levels and newest tooth, share of the swing. */
const outsideShare = 0.2;
/** A bump is kept clear of where that leaves this share of the eye. */
const clearShare = 1 / 4;
/** In the usual interval, share of the swing: what moves faster is the teeth's own doing. */
const fastestDrift = 0.1;
/** Drift is believed where the eye then holds more teeth, or as many and is so much wider. */
const widerForDrift = 1.1;

export class Eye {
  lowV = NaN;
  highV = NaN;
  /** Weak ones of the last turn are teeth; else they are what goes on between the teeth. */
  weakAreTeeth = true;
  private readonly log: ToothLog;
  /** Teeth of a turn, or as many as can be kept. */
  private readonly turn: number;
  private readonly proof: ToothProof;
  private readonly isRing: boolean;
  /** Bumps beside the teeth that are none: the band keeps clear of them where the teeth leave room. */
  private lobeLowV = NaN;
  private lobeHighV = NaN;
  private lobesSeenAt = 0;
  // What `span` finds.
  private spanLowV = NaN;
  private spanHighV = NaN;
  private spanTeeth = 0;
  private weakCount = 0;
  private weakSumV = NaN;

  /** @param isRing the shaft may turn to and fro. */
  constructor(log: ToothLog, teethPerTurn: number, proof: ToothProof, isRing: boolean) {
    this.log = log;
    this.isRing = isRing;
    this.proof = proof;
    this.turn = Math.min(Math.max(fewestTeeth, teethPerTurn), log.length - 1);
  }

  /** Levels were found anew: all of their swing is free. */
  open(lowV: number, highV: number): void {
    this.lowV = lowV;
    this.highV = highV;
    this.lobeLowV = this.lobeHighV = NaN;
  }

  /**
   * A trough (rising edge) or a peak of a tooth, V.
   * @param swingV the usual swing. @returns false where that would close the eye.
   */
  narrow(rising: boolean, extremeV: number, swingV: number): boolean {
    const leastV = closedShare * swingV;
    if (rising) {
      if (this.highV - extremeV < leastV) return false;
      if (extremeV > this.lowV) this.lowV = extremeV;
    } else {
      if (extremeV - this.lowV < leastV) return false;
      if (extremeV < this.highV) this.highV = extremeV;
    }
    return true;
  }

  /**
   * The tooth before the newest one is complete, and so is its rhythm: where it is a weak one, the eye closes to it.
   * @returns false where that would close the eye.
   */
  narrowToLast({ lowV, highV }: Levels, typicalS: number, noiseV: number): boolean {
    const { log } = this;
    const n = log.count - 2;
    const oldest = readableFrom(log, 0);
    if (n <= oldest || !this.weakAreTeeth) return true;
    const trough = log.troughV[n & log.mask]!;
    const peak = log.peakV[n & log.mask]!;
    const swingV = highV - lowV;
    if (!(peak - trough < strongShare * swingV) || peak - trough < leastToothV(swingV, noiseV)) return true;
    if (!this.proof.isProven(n, oldest, typicalS, swingV)) return true;
    return this.narrow(true, trough, swingV) && this.narrow(false, peak, swingV);
  }

  /** A bump from the low side (`up`) that came to `extremeV`, or one from the high side. */
  noteLobe(up: boolean, extremeV: number): void {
    this.forgetLobes();
    if (up && !(extremeV < this.lobeLowV)) this.lobeLowV = extremeV;
    if (!up && !(extremeV > this.lobeHighV)) this.lobeHighV = extremeV;
    this.lobesSeenAt = this.log.count;
  }

  /**
   * From the log.
   * @param typicalS the usual interval between teeth, s; NaN: not known. @param noiseV rms; NaN: not known.
   */
  refresh(levels: Levels, typicalS: number, noiseV: number): void {
    const { log } = this;
    this.weakAreTeeth = true;
    this.span(levels, typicalS, noiseV, 0);
    const swingV = levels.highV - levels.lowV;
    if (this.weakCount >= manyWeak && this.weakSumV < this.weakCount * leastAverageV(swingV, noiseV)) {
      this.weakAreTeeth = false;
      this.span(levels, typicalS, noiseV, 0);
    }
    if (!(this.spanHighV - this.spanLowV < Infinity)) return;
    let low = this.spanLowV;
    let high = this.spanHighV;
    const teeth = this.spanTeeth;
    // A shaft that dithers cuts peaks and troughs short as it likes, a few of them on a line.
    const leastV = this.isRing ? strongShare * swingV : 0;
    const fewest = this.isRing ? fewestTeeth : fewestForDrift;
    const driftVPerS = fitDrift(log, readableFrom(log, log.count - this.turn), fewest, leastV);
    if (driftVPerS !== 0 && Math.abs(driftVPerS) * typicalS <= fastestDrift * swingV) {
      this.span(levels, typicalS, noiseV, driftVPerS);
      const isWider = this.spanHighV - this.spanLowV > widerForDrift * (high - low);
      const isBetter = this.spanTeeth > teeth || (this.spanTeeth === teeth && isWider);
      if (isBetter && this.isNear(levels, outsideShare * swingV)) {
        low = this.spanLowV;
        high = this.spanHighV;
      }
    }
    this.forgetLobes();
    const clearV = Math.max(clearShare * (high - low), noiseV > 0 ? leastSigmas * noiseV : 0);
    this.lowV = this.lobeLowV > low && high - this.lobeLowV > clearV ? this.lobeLowV : low;
    this.highV = this.lobeHighV < high && this.lobeHighV - low > clearV ? this.lobeHighV : high;
  }

  private span({ lowV, highV }: Levels, typicalS: number, noiseV: number, driftVPerS: number): void {
    const { log } = this;
    const { mask, riseS, peakV, troughV } = log;
    const swingV = highV - lowV;
    const strongV = strongShare * swingV;
    const weakestV = leastToothV(swingV, noiseV);
    const leastV = closedShare * swingV;
    const oldest = readableFrom(log, 0);
    const from = readableFrom(log, log.count - this.turn);
    // Where drift is taken off, as it will be at the next tooth.
    const newestS = riseS[(log.count - 1) & mask]! + typicalS;
    let high = Infinity;
    let low = -Infinity;
    let teeth = 0;
    this.weakCount = 0;
    this.weakSumV = 0;
    for (let n = log.count - 1; n >= from; n--) {
      const i = n & mask;
      const movedV = driftVPerS === 0 ? 0 : driftVPerS * (newestS - riseS[i]!);
      // NaN where it was not seen, or has not come yet.
      const peak = peakV[i]! + movedV;
      const trough = troughV[i]! + movedV;
      // The newest one's peak may not have come yet: the one before it tells whether its trough was cut short.
      const isOpen = Number.isNaN(peak) && n > oldest && this.isRing;
      if (isOpen && peakV[(n - 1) & mask]! + movedV - trough < strongV) continue;
      if (peak - trough < strongV) {
        if (peak - trough < weakestV || !this.weakAreTeeth) break;
        if (!this.proof.isProven(n, oldest, typicalS, swingV)) continue;
        this.weakCount++;
        this.weakSumV += peak - trough;
      }
      const highest = peak < high ? peak : high;
      const lowest = trough > low ? trough : low;
      if (highest - lowest < leastV) break;
      high = highest;
      low = lowest;
      teeth++;
    }
    this.spanLowV = low;
    this.spanHighV = high;
    this.spanTeeth = teeth;
  }

  private isNear(levels: Levels, nearV: number): boolean {
    const { log } = this;
    const last = (log.count - 2) & log.mask;
    const lowest = Math.min(levels.lowV, log.troughV[last]!);
    const highest = Math.max(levels.highV, log.peakV[last]!);
    return this.spanLowV >= lowest - nearV && this.spanHighV <= highest + nearV;
  }

  private forgetLobes(): void {
    if (this.log.count - this.lobesSeenAt <= this.turn) return;
    this.lobeLowV = this.lobeHighV = NaN;
  }
}
