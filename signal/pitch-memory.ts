/**
 * What is known of the places of a wheel's teeth in one direction: learning, in use, found again after the numbers of a
 * plain wheel began anew, withdrawn where it no longer fits.
 *
 * A plain wheel is known by its own pattern (`pattern-match.ts`): the mean of the first turns after a stop is laid over what
 * was learnt. An even wheel has none and is learnt anew.
 */
import { PitchLearner } from '@/signal/pitch-learner';
import { matchPattern } from '@/signal/statistics/pattern-match';

/** Larger plain wheels would take too long to be laid over themselves at every shift; they are learnt anew. */
const mostToMatch = 512;
/** Turns after which a match is tried: twice as certain each time. */
const triesAt = [2, 4, 8, 16];
/**
 * A turn does not fit where it lies farther off than turns did while it was learnt: by twice in the mean square, and
 * 0.2 % of a pitch, in three turns running.
 */
const mostMisfit = 4;
const leastMisfit = 0.002 ** 2;
const strikesToWithdraw = 3;
/** What is in use is renewed at these turns, and at each multiple of the last. */
const renewedAt = [40, 80, 160, 320];

export class PitchMemory {
  /** Learnt offsets by position as it is counted now; null: not in use. A new one whenever it changes. */
  table: Float64Array | null = null;
  /** Learning now. */
  readonly fresh: PitchLearner;
  /** Accepted, in the numbers that held when it was learnt. */
  kept: PitchLearner | null = null;
  private readonly numbered: boolean;
  private readonly positions: number;
  /** Position 0 is the kept one of this number; -1: not known. */
  private shift = -1;
  private refuted = -1;
  private strikes = 0;

  /** @param numbered positions are fixed to the wheel. */
  constructor(positions: number, numbered: boolean) {
    this.positions = positions;
    this.numbered = numbered;
    this.fresh = new PitchLearner(positions);
  }

  get turns(): number {
    return this.table && this.kept ? this.kept.turns : this.fresh.turns;
  }

  /** In use, and the last turn was as it was learnt. */
  get fits(): boolean {
    return this.table !== null && this.strikes === 0;
  }

  /** The best that is known of how uneven the wheel is, wherever its teeth stand now; null: nothing yet. */
  get best(): PitchLearner | null {
    return this.kept ?? (this.fresh.turns > triesAt[0]! ? this.fresh : null);
  }

  /** Positions are counted anew. */
  renumber(): void {
    if (this.numbered) return;
    this.fresh.clear();
    this.shift = this.refuted = -1;
    this.strikes = 0;
    this.table = null;
    if (this.positions > mostToMatch) this.kept = null;
  }

  /** Takes a steady turn's offsets by position; NaN where no tooth came. */
  take(turn: Float64Array): void {
    if (this.kept && this.shift >= 0) this.use(this.kept, turn);
    else this.search(turn);
  }

  private use(kept: PitchLearner, turn: Float64Array): void {
    const misfit = kept.misfit(turn, this.shift);
    if (misfit > mostMisfit * kept.scatter + leastMisfit) {
      if (++this.strikes >= strikesToWithdraw) this.withdraw();
      return;
    }
    this.strikes = 0;
    kept.learn(turn, this.shift);
    const last = renewedAt[renewedAt.length - 1]!;
    if (renewedAt.includes(kept.turns) || kept.turns % last === 0) this.apply(kept);
  }

  private search(turn: Float64Array): void {
    const { fresh, kept } = this;
    fresh.learn(turn, 0);
    if (kept && triesAt.includes(fresh.turns)) {
      const match = matchPattern(fresh.offsets, kept.offsets, Math.sqrt(fresh.error + kept.error));
      if (match.ok && match.value.shift !== this.refuted) {
        this.shift = match.value.shift;
        this.apply(kept);
        return;
      }
    }
    if (!fresh.isAccepted()) return;
    const learnt = kept ?? new PitchLearner(this.positions);
    learnt.copy(fresh);
    this.kept = learnt;
    this.shift = 0;
    this.refuted = -1;
    this.apply(learnt);
  }

  /** It no longer fits: the count has slipped, or the wheel is another. */
  private withdraw(): void {
    this.table = null;
    this.strikes = 0;
    this.fresh.clear();
    this.refuted = this.shift;
    this.shift = -1;
    if (this.numbered) this.kept = null;
  }

  private apply(kept: PitchLearner): void {
    const { positions, shift } = this;
    this.fresh.clear();
    this.table = Float64Array.from({ length: positions }, (_, k) => kept.offsets[(k + shift) % positions]!);
  }
}
