/**
 * Pulses that are no teeth, as the tracker of the wheel tells them: where on the wheel they keep coming, and how many
 * came lately anywhere.
 *
 * A place scores one point for each turn in which a pulse came there and loses half a point for each turn in which none
 * did. Numbers are seldom: an extra pulse is an exception, so that calls with them cost nothing that matters.
 */

const mostPlaces = 8;
const mostRecent = 64;
/** Two pulses within this distance on the rim, in positions, come from the same thing. */
const sameWithin = 0.3;
const mostScore = 3.5;
const dropATurn = 0.5;

export type ExtraPlace = {
  /** In positions as they are counted, 0 .. positions. */
  place: number;
  /** Points as of `count`. */
  score: number;
  /** Turns in which it came. */
  turns: number;
  firstS: number;
  lastS: number;
};

export class ExtraPulses {
  /** Since the stream began. */
  total = 0;
  private readonly positions: number;
  private readonly list: (ExtraPlace & { lastCount: number })[] = [];
  private readonly recentS = new Float64Array(mostRecent).fill(NaN);
  /** Where each came, in positions as they are counted. */
  private readonly recentPlace = new Float64Array(mostRecent);

  constructor(positions: number) {
    this.positions = positions;
  }

  /** Places have lost their meaning; what came lately stays. */
  lose(): void {
    this.list.length = 0;
  }

  /** A pulse at the instant `t`, `count` positions after the count began (not whole). */
  note(count: number, t: number): void {
    this.recentS[this.total % mostRecent] = t;
    this.recentPlace[this.total % mostRecent] = count % this.positions;
    this.total++;
    const { positions, list } = this;
    const place = count % positions;
    const old = list.find((entry) => this.apart(entry.place, place) <= sameWithin);
    if (old) {
      const turns = Math.round((count - old.lastCount) / positions);
      // Two in one pitch, as bounce makes them, are one visit.
      if (turns < 1) return;
      old.score = Math.min(mostScore, this.scoreAt(old, count) + 1);
      old.turns++;
      old.place = place;
      old.lastCount = count;
      old.lastS = t;
      return;
    }
    const entry = { place, score: 1, turns: 1, firstS: t, lastS: t, lastCount: count };
    if (list.length < mostPlaces) list.push(entry);
    else list[this.faintest(count)] = entry;
  }

  /** Places that have at least `score` points at `count`. */
  placesAt(count: number, score: number): ExtraPlace[] {
    const found: ExtraPlace[] = [];
    for (const entry of this.list) {
      const now = this.scoreAt(entry, count);
      if (now >= score) found.push({ ...entry, score: now });
    }
    return found;
  }

  /** What came since `fromS`, s, in no order; at most 64 are remembered. */
  since(fromS: number): { t: number; place: number }[] {
    const found: { t: number; place: number }[] = [];
    for (let i = 0; i < mostRecent; i++)
      if (this.recentS[i]! >= fromS) found.push({ t: this.recentS[i]!, place: this.recentPlace[i]! });
    return found;
  }

  /** Whether two places are one and the same thing on the rim. */
  isSame(a: number, b: number): boolean {
    return this.apart(a, b) <= sameWithin;
  }

  private apart(a: number, b: number): number {
    const off = Math.abs(a - b);
    return Math.min(off, this.positions - off);
  }

  private scoreAt(entry: { score: number; lastCount: number }, count: number): number {
    // The turn that is under way has not passed the place yet.
    const without = Math.max(0, Math.floor((count - entry.lastCount - sameWithin) / this.positions - 0.5));
    return Math.max(0, entry.score - dropATurn * without);
  }

  private faintest(count: number): number {
    let worst = 0;
    for (let i = 1; i < this.list.length; i++)
      if (this.scoreAt(this.list[i]!, count) < this.scoreAt(this.list[worst]!, count)) worst = i;
    return worst;
  }
}
