/** How far A leads B, as a mean over the last cycles, taken round the circle. */
const share = 1 / 16;

export class PhaseLead {
  /** Cycles, about 0 to 1 and not brought back there; NaN where not known. */
  private mean = NaN;

  /** Degrees, -180 to 180; NaN where not known. */
  get deg(): number {
    const { mean } = this;
    return 360 * (mean - Math.round(mean));
  }

  /** B rose so many periods of A after A; anything outside one period tells nothing. */
  learn(periods: number): void {
    if (!(periods >= 0 && periods < 1)) return;
    const off = periods - this.mean;
    if (off === off) this.mean += share * (off - Math.round(off));
    else this.mean = periods;
  }
}
