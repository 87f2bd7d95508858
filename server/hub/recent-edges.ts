/**
 * The newest marks of the tooth rail, for drawing: a ring of columns that grows while its oldest mark is still within
 * what a viewer may ask for.
 */
const firstCapacity = 1024;
const mostMarks = 1 << 17;
/** Longest picture, s. */
const keptS = 60;

export type Mark = { t: number; flags: number };

export class RecentMarks {
  #t = new Float64Array(firstCapacity);
  #flags = new Uint8Array(firstCapacity);
  #written = 0;

  push(t: number, flags: number): void {
    const capacity = this.#t.length;
    const at = this.#written % capacity;
    if (this.#written >= capacity && capacity < mostMarks && t - (this.#t[at] as number) < keptS) {
      this.#grow();
      return this.push(t, flags);
    }
    this.#t[at] = t;
    this.#flags[at] = flags;
    this.#written += 1;
  }

  /** How many lie in `fromS <= t <= toS`. */
  count(fromS: number, toS: number): number {
    const [first, end] = this.#range(fromS, toS);
    return end - first;
  }

  /**
   * Those in `fromS <= t <= toS`, oldest first; with `apartS` only such as stand at least so far from the last one taken
   * with the same flags: closer ones fall on one place of the picture.
   */
  between(fromS: number, toS: number, apartS = 0): Mark[] {
    const [first, end] = this.#range(fromS, toS);
    const found: Mark[] = [];
    const lastOf = new Map<number, number>();
    for (let i = first; i < end; i += 1) {
      const t = this.#t[i % this.#t.length] as number;
      const flags = this.#flags[i % this.#t.length] as number;
      if (apartS > 0 && t - (lastOf.get(flags) ?? -Infinity) < apartS) continue;
      lastOf.set(flags, t);
      found.push({ t, flags });
    }
    return found;
  }

  #grow(): void {
    const old = this.#t.length;
    const t = new Float64Array(2 * old);
    const flags = new Uint8Array(2 * old);
    for (let i = this.#written - old; i < this.#written; i += 1) {
      t[i % (2 * old)] = this.#t[i % old] as number;
      flags[i % (2 * old)] = this.#flags[i % old] as number;
    }
    this.#t = t;
    this.#flags = flags;
  }

  /** Running numbers of the marks in the stretch; marks come in order of time. */
  #range(fromS: number, toS: number): [first: number, end: number] {
    const oldest = Math.max(0, this.#written - this.#t.length);
    return [this.#firstFrom(oldest, fromS, false), this.#firstFrom(oldest, toS, true)];
  }

  #firstFrom(oldest: number, limitS: number, after: boolean): number {
    let low = oldest;
    let high = this.#written;
    while (low < high) {
      const middle = Math.floor((low + high) / 2);
      const t = this.#t[middle % this.#t.length] as number;
      if (after ? t <= limitS : t < limitS) low = middle + 1;
      else high = middle;
    }
    return low;
  }
}
