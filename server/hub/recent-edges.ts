/**
 * The newest marks of the tooth rail, for drawing: pieces of columns, held for as long as a picture may reach back, and
 * in pieces so that no growing copies them (see `RecentSignal`).
 */
const pieceMarks = 1024;
const mostPieces = 128;
/** Longest picture, s. */
const keptS = 60;

export type Mark = { t: number; flags: number };

type Piece = { count: number; t: Float64Array; flags: Uint8Array };

export class RecentMarks {
  /** Oldest first. */
  #pieces: Piece[] = [];

  push(t: number, flags: number): void {
    let last = this.#pieces[this.#pieces.length - 1];
    if (last === undefined || last.count === pieceMarks) {
      last = this.#fresh(t);
      this.#pieces.push(last);
    }
    last.t[last.count] = t;
    last.flags[last.count] = flags;
    last.count += 1;
  }

  /** A piece that is too old to be drawn, or a new one. */
  #fresh(t: number): Piece {
    const first = this.#pieces[0];
    const spent =
      first !== undefined &&
      (t - (first.t[first.count - 1] as number) > keptS || this.#pieces.length === mostPieces);
    if (!spent) return { count: 0, t: new Float64Array(pieceMarks), flags: new Uint8Array(pieceMarks) };
    this.#pieces.shift();
    first.count = 0;
    return first;
  }

  /** How many lie in `fromS <= t <= toS`. */
  count(fromS: number, toS: number): number {
    let sum = 0;
    for (const piece of this.#pieces) {
      const [from, end] = rangeOf(piece, fromS, toS);
      sum += end - from;
    }
    return sum;
  }

  /**
   * Those in `fromS <= t <= toS`, oldest first; with `apartS` only such as stand at least so far from the last one taken
   * with the same flags: closer ones fall on one place of the picture.
   */
  between(fromS: number, toS: number, apartS = 0): Mark[] {
    const found: Mark[] = [];
    const lastOf = new Map<number, number>();
    for (const piece of this.#pieces) {
      const [from, end] = rangeOf(piece, fromS, toS);
      for (let i = from; i < end; i += 1) {
        const t = piece.t[i] as number;
        const flags = piece.flags[i] as number;
        if (apartS > 0 && t - (lastOf.get(flags) ?? -Infinity) < apartS) continue;
        lastOf.set(flags, t);
        found.push({ t, flags });
      }
    }
    return found;
  }
}

/** Places of a piece in the stretch; marks come in order of time. */
function rangeOf(piece: Piece, fromS: number, toS: number): [from: number, end: number] {
  return [firstFrom(piece, (t) => t >= fromS), firstFrom(piece, (t) => t > toS)];
}

function firstFrom({ t, count }: Piece, reached: (t: number) => boolean): number {
  let low = 0;
  let high = count;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (reached(t[middle] as number)) high = middle;
    else low = middle + 1;
  }
  return low;
}
