/** How far A leads B, as a circular mean over the last cycles. */
const share = 1 / 16;

export class PhaseLead {
  private cos = 0;
  private sin = 0;

  /** Degrees, -180 to 180; NaN where not known. */
  get deg(): number {
    return this.cos === 0 && this.sin === 0 ? NaN : (Math.atan2(this.sin, this.cos) * 180) / Math.PI;
  }

  reset(): void {
    this.cos = this.sin = 0;
  }

  /** B rose so many periods of A after A; anything outside one period tells nothing. */
  learn(periods: number): void {
    if (!(periods >= 0 && periods < 1)) return;
    const gain = this.cos === 0 && this.sin === 0 ? 1 : share;
    this.cos += gain * (Math.cos(2 * Math.PI * periods) - this.cos);
    this.sin += gain * (Math.sin(2 * Math.PI * periods) - this.sin);
  }
}
