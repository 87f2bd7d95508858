/** What the last windows counted together: at few teeth a second one window holds too few bounces to be judged by. */

const longestS = 2.5;
const mostWindows = 10;

export class RecentBounces {
  /** Sums over the windows of the last 2.5 s, the newest one whole. */
  counted = 0;
  short = 0;
  /** Begin of the oldest of them, s. */
  fromS = NaN;
  shortestS = Infinity;
  private readonly windows: { fromS: number; counted: number; short: number; shortestS: number }[] = [];

  clear(): void {
    this.windows.length = 0;
    this.counted = this.short = 0;
    this.fromS = NaN;
    this.shortestS = Infinity;
  }

  /** A window from `fromS` to `nowS` is over. */
  add(fromS: number, counted: number, short: number, shortestS: number, nowS: number): void {
    const { windows } = this;
    windows.push({ fromS, counted, short, shortestS });
    while (windows.length > mostWindows || (windows.length > 1 && nowS - windows[0]!.fromS > longestS))
      windows.shift();
    this.counted = this.short = 0;
    this.shortestS = Infinity;
    this.fromS = windows[0]!.fromS;
    for (const window of windows) {
      this.counted += window.counted;
      this.short += window.short;
      this.shortestS = Math.min(this.shortestS, window.shortestS);
    }
  }
}
