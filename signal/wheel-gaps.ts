/**
 * Stretches of more than one pitch between two teeth: teeth that did not show, and on a wheel with a gap which one is the
 * gap. That is known once two wide enough ones came exactly a turn apart; a gap found elsewhere later is believed only where
 * teeth came in the old one.
 */
export class WheelGaps {
  /** How many positions the last stretches lie apart, and how many times in a row the same; of how many pitches they are. */
  between = 0;
  sameBetween = 0;
  spans = 0;
  /** Count at the last of them; -1: none since the count began. */
  lastAt = -1;
  /** Times that teeth which should have come did not, since the stream began. */
  missedTeeth = 0;
  /** A tooth came where the wheel has none, since the gap was last seen. */
  isFilled = false;
  private readonly positions: number;
  private readonly missing: number;
  private candidate = -1;

  constructor(positions: number, missing: number) {
    this.positions = positions;
    this.missing = missing;
  }

  clear(): void {
    this.lastAt = this.candidate = -1;
    this.between = this.sameBetween = this.spans = 0;
    this.isFilled = false;
  }

  /**
   * The tooth at `count` came `spans` pitches after the one before it.
   * @param position of it on the wheel; -1: not known. @returns true where it is the first one after the gap, anew.
   */
  note(spans: number, count: number, position: number): boolean {
    const { positions, missing } = this;
    this.noteDistance(spans, count);
    if (missing === 0) {
      this.missedTeeth++;
      return false;
    }
    if (position >= 0) {
      const before = (position - spans + 2 * positions) % positions;
      const overGap = before < positions - missing && before + spans >= positions;
      if (!overGap || spans > missing + 1) this.missedTeeth++;
      if (overGap) this.isFilled = false;
      if (overGap || spans !== missing + 1 || !this.isFilled) return false;
    } else if (spans <= missing) {
      return false;
    }
    const since = count - this.candidate;
    if (this.candidate >= 0 && since === positions) {
      this.candidate = -1;
      this.isFilled = false;
      return true;
    }
    if (this.candidate < 0 || since > positions) this.candidate = count;
    return false;
  }

  private noteDistance(spans: number, count: number): void {
    if (this.lastAt >= 0) {
      const between = count - this.lastAt;
      const same = between === this.between && spans === this.spans;
      this.sameBetween = same ? this.sameBetween + 1 : 1;
      this.between = between;
    }
    this.spans = spans;
    this.lastAt = count;
  }
}
