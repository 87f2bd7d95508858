/**
 * The last teeth that speed is taken from, as columns in a ring that grows by doubling. Entries are `first .. next - 1`,
 * each at its number `& mask`.
 *
 * `places` counts positions, `marks` are the same with the learnt offset of each tooth, `falls` the end of the tooth, and
 * `turns` the duration of the whole turn that the tooth closes; NaN where not known.
 */
export class SpeedRing {
  first = 0;
  next = 0;
  mask = 63;
  times: Float64Array = new Float64Array(64);
  places: Float64Array = new Float64Array(64);
  marks: Float64Array = new Float64Array(64);
  falls: Float64Array = new Float64Array(64);
  turns: Float64Array = new Float64Array(64);

  get count(): number {
    return this.next - this.first;
  }

  clear(): void {
    this.first = this.next;
  }

  /** Index of a new entry, whose columns are for the caller to write. */
  room(): number {
    if (this.next - this.first > this.mask) this.widen();
    const i = this.next++ & this.mask;
    this.falls[i] = this.turns[i] = NaN;
    return i;
  }

  private widen(): void {
    this.times = this.wider(this.times);
    this.places = this.wider(this.places);
    this.marks = this.wider(this.marks);
    this.falls = this.wider(this.falls);
    this.turns = this.wider(this.turns);
    this.mask = this.times.length - 1;
  }

  private wider(old: Float64Array): Float64Array {
    const mask = 2 * old.length - 1;
    const wide = new Float64Array(mask + 1);
    for (let k = this.first; k < this.next; k++) wide[k & mask] = old[k & this.mask]!;
    return wide;
  }
}
