/**
 * Places of the wheel that stayed empty. A place scores one point for each turn in which its tooth did not come, and loses
 * half a point for each in which it did: three turns running accuse it, and so does a tooth that fails every other turn.
 */

const mostScore = 3.5;
const dropATurn = 0.5;

export class WheelAbsence {
  /** Turns in a row in which nothing came where the tooth should be. */
  readonly inRow: Uint16Array;
  readonly score: Float32Array;
  /** Turns in which the tooth did not come since it first failed to. */
  readonly turns: Uint32Array;
  /** Where the tooth of each position should have come when it last did not, s, and when that began. */
  readonly missedS: Float64Array;
  readonly sinceS: Float64Array;
  /** Places with a score. */
  suspects = 0;

  constructor(positions: number) {
    this.inRow = new Uint16Array(positions);
    this.score = new Float32Array(positions);
    this.turns = new Uint32Array(positions);
    this.missedS = new Float64Array(positions).fill(NaN);
    this.sinceS = new Float64Array(positions).fill(NaN);
  }

  clear(): void {
    this.missedS.fill(NaN);
    this.inRow.fill(0);
    this.score.fill(0);
    this.suspects = 0;
  }

  /** A tooth near `place` (in positions) has failed since `fromS`. */
  failedNear(place: number, fromS: number): boolean {
    const { missedS } = this;
    const { length } = missedS;
    for (let k = Math.floor(place) - 1; k <= Math.floor(place) + 2; k++)
      if (missedS[(k + length) % length]! >= fromS) return true;
    return false;
  }

  /** The tooth at `position` came. */
  came(position: number): void {
    if (this.score[position] === 0) return;
    this.inRow[position] = 0;
    const left = this.score[position]! - dropATurn;
    this.score[position] = Math.max(0, left);
    if (left <= 0) this.suspects--;
  }

  /** Nothing came at `position`, where it was due at `dueS`. */
  stayedEmpty(position: number, dueS: number): void {
    const score = this.score[position]!;
    if (score === 0) {
      this.suspects++;
      this.sinceS[position] = dueS;
      this.turns[position] = 0;
    }
    this.inRow[position] = Math.min(65_535, this.inRow[position]! + 1);
    this.turns[position] = this.turns[position]! + 1;
    this.score[position] = Math.min(mostScore, score + 1);
    this.missedS[position] = dueS;
  }
}
