/**
 * Whether something smaller than the usual teeth is a tooth. It stands where the teeth's rhythm lets one be expected, before
 * and after; and where the shaft may turn to and fro, so that a reversal cuts peaks short at any place, it was there in the
 * turns before as well, with usual teeth between: a shaft that just shakes has none.
 */
import type { ToothLog } from '@/signal/tooth-log';
import { strongShare } from '@/signal/tooth-size';

/** In the rhythm: so much of the usual interval. */
const leastInterval = 0.6;
const longestInterval = 1.67;
/** The same across a wheel's gap. */
const leastGap = 0.75;
const longestGap = 1.33;
/** A weak tooth was so weak a turn before, and about as weak as it is now, share of the usual swing. */
const weakBefore = 0.9;
const nearlyAs = 0.2;
/** What is counted in a turn while some of its teeth are not, share of them. */
const turnShare = 0.75;
const leastStrong = 0.5;
const mostSearched = 64;
const kept = 16;
/** So many turns before it was there, and more of turns of few teeth: twice may be by chance. */
const fewestTurns = 2;
const teethOfTurns = 16;
/** One that was counted changes no count, so that more can be waited for. */
const teethOfCounted = 48;

export class ToothProof {
  private readonly log: ToothLog;
  private readonly teethPerTurn: number;
  /** Positions from the tooth before the wheel's gap to the one behind it; 1: there is no gap. */
  private readonly gapSpan: number;
  private readonly isRing: boolean;
  private readonly turns: number;
  private readonly turnsOfCounted: number;
  /** Teeth counted when some that were not counted were last found, and how often that was. */
  private readonly foundAt = new Float64Array(kept).fill(-Infinity);
  private findings = 0;

  /** @param missing teeth that the wheel lacks in a row. @param isRing the shaft may turn to and fro. */
  constructor(log: ToothLog, teethPerTurn: number, missing: number, isRing: boolean) {
    this.log = log;
    this.teethPerTurn = teethPerTurn;
    this.gapSpan = missing + 1;
    this.isRing = isRing;
    this.turns = Math.max(fewestTurns, Math.ceil(teethOfTurns / teethPerTurn));
    this.turnsOfCounted = Math.max(fewestTurns, Math.ceil(teethOfCounted / teethPerTurn));
  }

  /**
   * Tooth `n`, which was counted.
   * @param oldest the first one in the log. @param typicalS the usual interval. @param swingV the usual swing.
   */
  isProven(n: number, oldest: number, typicalS: number, swingV: number): boolean {
    const { log, teethPerTurn } = this;
    const { riseS, peakV, troughV, mask } = log;
    const here = riseS[n & mask]!;
    if (n === oldest || n === log.count - 1) return false;
    if (!this.isUsual((here - riseS[(n - 1) & mask]!) / typicalS)) return false;
    if (!this.isUsual((riseS[(n + 1) & mask]! - here) / typicalS)) return false;
    if (!this.isRing) return true;
    const toothV = peakV[n & mask]! - troughV[n & mask]!;
    const mostV = Math.min(weakBefore * swingV, toothV + nearlyAs * swingV);
    for (let turn = 1; turn <= this.turnsOfCounted; turn++) {
      const before = n - turn * teethPerTurn;
      if (before < oldest || !(peakV[before & mask]! - troughV[before & mask]! < mostV)) return false;
      if (this.strongBetween(before, before + teethPerTurn, swingV) === 0) return false;
    }
    return true;
  }

  /** Teeth that were not counted have been found now. @returns true where that is enough to believe in them. */
  isBelieved(swingV: number): boolean {
    if (!this.isRing) return true;
    const { foundAt, teethPerTurn } = this;
    const { count } = this.log;
    let again = 0;
    for (let turn = 1; turn <= this.turns; turn++) if (this.wasFound(count, turn * teethPerTurn)) again++;
    foundAt[this.findings++ % kept] = count;
    if (again < this.turns) return false;
    const searched = Math.min(teethPerTurn, mostSearched);
    return this.strongBetween(count - searched, count, swingV) >= leastStrong * turnShare * searched;
  }

  /** So many teeth ago, those left out that were not counted. */
  private wasFound(count: number, teeth: number): boolean {
    for (let k = 0; k < kept; k++) {
      const since = count - this.foundAt[k]!;
      if (since <= teeth && since >= turnShare * teeth) return true;
    }
    return false;
  }

  /** Usual teeth among those behind `from` and before `to`; of many only the last ones are looked at. */
  private strongBetween(from: number, to: number, swingV: number): number {
    const { peakV, troughV, mask } = this.log;
    let strong = 0;
    for (let n = Math.max(from, to - mostSearched) + 1; n < to; n++)
      if (peakV[n & mask]! - troughV[n & mask]! >= strongShare * swingV) strong++;
    return strong;
  }

  private isUsual(ratio: number): boolean {
    const { gapSpan } = this;
    if (ratio >= leastInterval && ratio <= longestInterval) return true;
    return gapSpan > 1 && ratio >= leastGap * gapSpan && ratio <= longestGap * gapSpan;
  }
}
