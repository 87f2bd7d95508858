/** Samples a second as they arrive, over the last two seconds of the hub's own clock. */
const slotMs = 250;
const slots = 8;

export class RateMeter {
  readonly #counts = new Float64Array(slots);
  #slot = -1;
  #sinceMs = 0;

  add(nowMs: number, samples: number): void {
    this.#turnTo(nowMs);
    const at = this.#slot % slots;
    this.#counts[at] = (this.#counts[at] as number) + samples;
  }

  /** null until a full second has been seen. The slot that is filling does not count. */
  read(nowMs: number): number | null {
    if (this.#slot < 0) return null;
    this.#turnTo(nowMs);
    const full = Math.min(slots - 1, this.#slot - Math.floor(this.#sinceMs / slotMs));
    if (full < 1000 / slotMs) return null;
    let sum = 0;
    for (let back = 1; back <= full; back += 1) sum += this.#counts[(this.#slot - back) % slots] as number;
    return sum / ((full * slotMs) / 1000);
  }

  #turnTo(nowMs: number): void {
    const slot = Math.floor(nowMs / slotMs);
    if (this.#slot < 0 || slot - this.#slot >= slots) {
      if (this.#slot < 0 || slot - this.#slot >= 4 * slots) this.#sinceMs = nowMs;
      this.#counts.fill(0);
    } else for (let s = this.#slot + 1; s <= slot; s += 1) this.#counts[s % slots] = 0;
    this.#slot = Math.max(this.#slot, slot);
  }
}
