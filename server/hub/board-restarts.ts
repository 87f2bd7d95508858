/** When a board began a new stream while the one before had only just ended: that is what a restart looks like from here. */
const withinMs = 10 * 60_000;

/** Streams that the hub itself names (a POST without a stream's name is a run of its own) are no restart of a board. */
export const postedStreamPrefix = 'post-';

export class BoardRestarts {
  #atMs: number[] = [];

  /**
   * A stream takes over from another.
   * @returns restarts within the last ten minutes, this one included; null where it is none.
   */
  note(before: { name: string; lastBlockAtMs: number }, name: string, nowMs: number): number | null {
    if (before.name.startsWith(postedStreamPrefix) || name.startsWith(postedStreamPrefix)) return null;
    if (nowMs - before.lastBlockAtMs > withinMs) return null;
    this.#atMs = this.#atMs.filter((at) => nowMs - at < withinMs);
    this.#atMs.push(nowMs);
    return this.#atMs.length;
  }
}
