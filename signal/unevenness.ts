/**
 * How far pitches of the wheel and states of its ring lately were longer than even ones: for how much silence proves nothing.
 *
 * The widest comes once a turn, and must still be known when it comes again; what was wide since the shaft slowed down, or
 * for noise, is to go. So the widest of the turn under way and of the one before it is kept.
 */

/** Room for the pitches of a wheel that was not seen for a turn: over twice their rms where teeth are off by 3 % of the pitch. */
const widestUnseen = 1.1;
const longestPitch = 1.5;

class WidestOfTurns {
  private readonly turn: number;
  // Numbers begin as fractions where they will be such: see `motion.ts`.
  private here = -0.5;
  private before = -0.5;
  private count = 0;
  private turns = 0;

  /** @param turn how many come in a turn. */
  constructor(turn: number) {
    this.turn = turn;
  }

  forget(): void {
    this.here = this.before = -0.5;
    this.count = this.turns = 0;
  }

  note(width: number): void {
    if (width > this.here) this.here = width;
    this.count++;
    if (this.count < this.turn) return;
    this.count = 0;
    this.turns++;
    this.before = this.here;
    this.here = -0.5;
  }

  get hasTurn(): boolean {
    return this.turns > 0;
  }

  get widest(): number {
    return Math.max(this.here, this.before);
  }
}

export class Unevenness {
  ratio = NaN;
  private readonly pitches: WidestOfTurns;
  private readonly states: WidestOfTurns;
  private readonly stepsPerCycle: number;

  /** @param stepsPerCycle states of the ring in a pitch; 1: there is no ring. */
  constructor(pulsesPerTurn: number, stepsPerCycle: number) {
    this.pitches = new WidestOfTurns(pulsesPerTurn);
    this.states = new WidestOfTurns(pulsesPerTurn * stepsPerCycle);
    this.stepsPerCycle = stepsPerCycle;
  }

  /** What was learnt of pitches no longer holds. */
  reset(): void {
    this.pitches.forget();
  }

  noteState(share: number): void {
    if (share > 0 && share < 1) this.states.note(share);
  }

  /** A pitch took `ratio` mean ones; a field, since a number that is passed to a function may be boxed. */
  notePitch(): void {
    if (this.ratio < longestPitch) this.pitches.note(this.ratio);
  }

  /** Longest pitch of the last turns in mean ones: uneven teeth and a swaying shaft. */
  get widestPitch(): number {
    const { hasTurn, widest } = this.pitches;
    return Math.max(hasTurn ? 1 : widestUnseen, widest);
  }

  /** Largest share of a cycle that one state of the ring took. */
  get widestState(): number {
    const { hasTurn, widest } = this.states;
    return Math.max((hasTurn ? 1 : 2) / this.stepsPerCycle, widest);
  }
}
