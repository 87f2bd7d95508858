/**
 * Since when the shaft turns undisturbed: no start, stop, reversal, lost samples or broken count. Rules of findings judge
 * teeth only inside such a stretch.
 */
export class Calm {
  /** Begin of the stretch, s. */
  sinceS = NaN;
  /** Teeth of the first channel since then. */
  teeth = 0;
  /** Disturbances so far. */
  disturbances = 0;

  disturb(t: number): void {
    this.sinceS = t;
    this.teeth = 0;
    this.disturbances++;
  }
}
