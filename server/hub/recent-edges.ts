/** The newest marks of the tooth rail, for drawing: a bounded ring of columns. */
export class RecentMarks {
  readonly #t: Float64Array;
  readonly #flags: Uint8Array;
  #written = 0;

  constructor(private readonly capacity: number) {
    this.#t = new Float64Array(capacity);
    this.#flags = new Uint8Array(capacity);
  }

  push(t: number, flags: number): void {
    const at = this.#written % this.capacity;
    this.#t[at] = t;
    this.#flags[at] = flags;
    this.#written += 1;
  }

  /** Oldest first, only those with `fromS <= t <= toS`. */
  between(fromS: number, toS: number): { t: number; flags: number }[] {
    const found: { t: number; flags: number }[] = [];
    for (let i = this.#written - 1; i >= Math.max(0, this.#written - this.capacity); i -= 1) {
      const t = this.#t[i % this.capacity] as number;
      if (t < fromS) break;
      if (t <= toS) found.push({ t, flags: this.#flags[i % this.capacity] as number });
    }
    return found.reverse();
  }
}
