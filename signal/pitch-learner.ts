/**
 * The places of a wheel's teeth as they are, learnt turn by turn: by how much each is off its ideal place, in positions,
 * and how far that scatters.
 *
 * Accepted where it makes a speed better and can be relied on:
 * - 20 turns, so that what happened to be alike in a few is not the wheel's;
 * - the standard error of each mean, not the scatter of single turns, is below 0.25 % of a pitch: at 20 dB of signal to
 *   noise single turns scatter by more than 1 %, and their mean is still worth having after some 20 turns;
 * - single turns scatter by less than 5 % of a pitch: beyond, what repeats is little beside what does not;
 * - no pitch is off by a fifth: that is damage, or a wrong number of teeth, and to be said rather than taken out. (A tenth
 *   would shut out wheels whose teeth are off by 3 % rms, which have a pitch of 10 % among sixty.)
 * Source of the idea: self-calibration from time stamps, Lu et al., CIRP Annals 59 (2010) 529-534; the conditions are ours.
 */

export const turnsNeeded = 20;
/** Means run over about so many turns. */
const memoryTurns = 256;
const mostError = 0.0025;
const mostScatter = 0.05;
const mostOff = 0.2;

export class PitchLearner {
  turns = 0;
  /** By position; 0 where nothing was ever seen. */
  readonly offsets: Float64Array;
  /** Variance of a tooth's place in a single turn, mean of all teeth, positions squared. */
  scatter = NaN;
  private readonly variances: Float64Array;
  readonly counts: Uint16Array;

  constructor(positions: number) {
    this.offsets = new Float64Array(positions);
    this.variances = new Float64Array(positions);
    this.counts = new Uint16Array(positions);
  }

  clear(): void {
    this.turns = 0;
    this.scatter = NaN;
    this.offsets.fill(0);
    this.variances.fill(0);
    this.counts.fill(0);
  }

  copy(other: PitchLearner): void {
    this.turns = other.turns;
    this.scatter = other.scatter;
    this.offsets.set(other.offsets);
    this.variances.set(other.variances);
    this.counts.set(other.counts);
  }

  /** Rms of the offsets about their mean, positions, the part that is chance taken out. */
  rms(): number {
    let sum = 0;
    let squares = 0;
    let seen = 0;
    for (let k = 0; k < this.offsets.length; k++) {
      if (this.counts[k] === 0) continue;
      sum += this.offsets[k]!;
      squares += this.offsets[k]! ** 2;
      seen++;
    }
    return Math.sqrt(Math.max(0, (squares - (sum * sum) / seen) / (seen - 1) - this.error));
  }

  /** Turns that the means are worth. */
  get worth(): number {
    return Math.min(this.turns, memoryTurns);
  }

  /** Variance of one learnt offset, positions squared. */
  get error(): number {
    return this.scatter / this.worth;
  }

  /**
   * Mean square of how far a turn lies from what was learnt, positions squared; a common shift is none.
   * @param turn offsets by position, NaN where no tooth came. @param shift its position 0 is the learnt one of this number.
   */
  misfit(turn: Float64Array, shift: number): number {
    const n = turn.length;
    let sum = 0;
    let squares = 0;
    let seen = 0;
    for (let k = 0; k < n; k++) {
      const to = k + shift < n ? k + shift : k + shift - n;
      const off = turn[k]! - this.offsets[to]!;
      if (Number.isNaN(off) || this.counts[to] === 0) continue;
      sum += off;
      squares += off * off;
      seen++;
    }
    return (squares - (sum * sum) / seen) / (seen - 1);
  }

  /** Takes a turn; as in `misfit`. */
  learn(turn: Float64Array, shift: number): void {
    const { offsets, variances, counts } = this;
    const n = turn.length;
    const common = this.common(turn, shift);
    let scatter = 0;
    let seen = 0;
    this.turns++;
    for (let k = 0; k < n; k++) {
      const to = k + shift < n ? k + shift : k + shift - n;
      const off = turn[k]! - common - offsets[to]!;
      if (!Number.isNaN(off)) {
        const count = Math.min(memoryTurns, counts[to]! + 1);
        counts[to] = count;
        offsets[to] = offsets[to]! + off / count;
        variances[to] = (1 - 1 / count) * (variances[to]! + (off * off) / count);
      }
      if (counts[to]! < 2) continue;
      scatter += (variances[to]! * counts[to]!) / (counts[to]! - 1);
      seen++;
    }
    this.scatter = scatter / seen;
  }

  /** What was learnt may be used. */
  isAccepted(): boolean {
    const { turns, offsets, variances, counts } = this;
    if (turns < turnsNeeded || !(this.scatter < mostScatter * mostScatter)) return false;
    const n = offsets.length;
    let last = -1;
    for (let k = 0; k < 2 * n; k++) {
      const at = k % n;
      const count = counts[at]!;
      if (count === 0) continue;
      if (!(variances[at]! < mostError * mostError * (count - 1))) return false;
      if (last === k - 1 && Math.abs(offsets[at]! - offsets[last % n]!) > mostOff) return false;
      last = k;
    }
    return last >= 0;
  }

  private common(turn: Float64Array, shift: number): number {
    const { offsets, counts } = this;
    const n = turn.length;
    let sum = 0;
    let seen = 0;
    for (let k = 0; k < n; k++) {
      const to = k + shift < n ? k + shift : k + shift - n;
      const off = turn[k]! - offsets[to]!;
      if (Number.isNaN(off) || (this.turns > 0 && counts[to] === 0)) continue;
      sum += off;
      seen++;
    }
    return sum / seen;
  }
}
