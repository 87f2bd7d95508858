/** How far pitches of the wheel and states of its ring lately were longer than even ones: for how much silence proves nothing. */
export class Unevenness {
  /** Largest share of a cycle that one state of the ring took; NaN: not known. */
  widestState = NaN;
  /** Longest pitch of the last turns in mean ones: uneven teeth and a swaying shaft. (Begins as a fraction, see `motion.ts`.) */
  widestPitch = 1.5;
  ratio = NaN;
  private readonly fading: number;

  constructor(pulsesPerTurn: number) {
    // The widest comes once a turn, and must still be known when it comes again.
    this.fading = 1 - 1 / (8 * pulsesPerTurn);
    this.reset();
  }

  /** What was learnt of pitches no longer holds. */
  reset(): void {
    this.widestPitch = 1;
  }

  noteState(share: number): void {
    if (!(share > 0 && share < 1)) return;
    const before = Number.isNaN(this.widestState) ? 0 : this.widestState * 0.99;
    this.widestState = Math.max(share, before);
  }

  /** A pitch took `ratio` mean ones; a field, since a number that is passed to a function may be boxed. */
  notePitch(): void {
    const { ratio } = this;
    if (ratio < 1.5) this.widestPitch = Math.max(ratio, 1 + (this.widestPitch - 1) * this.fading);
  }
}
