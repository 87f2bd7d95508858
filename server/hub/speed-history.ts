/** Speed of the last minute at four points a second of stream time, for the spark under the number. */
const stepS = 0.25;
const points = 240;

export class SpeedHistory {
  #t: number[] = [];
  #rpm: (number | null)[] = [];
  #dueS = -Infinity;

  add(nowS: number, rpm: () => number | null): void {
    if (nowS < this.#dueS) return;
    this.#dueS = nowS + stepS;
    this.#t.push(nowS);
    this.#rpm.push(rpm());
    if (this.#t.length > points) {
      this.#t.shift();
      this.#rpm.shift();
    }
  }

  /** Oldest first; `agoS` counts back from `nowS`. */
  read(nowS: number): { agoS: number[]; rpm: (number | null)[] } {
    return { agoS: this.#t.map((t) => Math.max(0, Math.round((nowS - t) * 100) / 100)), rpm: [...this.#rpm] };
  }
}
