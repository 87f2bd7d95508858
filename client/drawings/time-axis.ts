/** Moments on a drawing's axis and where they stand, px. */
export type TimeScale = { fromS: number; toS: number; x: (s: number) => number; s: (x: number) => number };

/** A true time axis from `left` to `right` px. */
export function timeScale(fromS: number, toS: number, left: number, right: number): TimeScale {
  const pxPerS = (right - left) / Math.max(toS - fromS, 1e-12);
  return { fromS, toS, x: (s) => left + (s - fromS) * pxPerS, s: (x) => fromS + (x - left) / pxPerS };
}

export type Tick = { s: number; label: string };

/** 1, 2 or 5 times a power of ten, the smallest that is at least `least`. */
export function niceStep(least: number): number {
  const decade = 10 ** Math.floor(Math.log10(least));
  const found = [1, 2, 5, 10].find((m) => m * decade >= least * (1 - 1e-9))!;
  return found * decade;
}

/**
 * At most `most` round moments between two instants. `anchorS` given: labels count back from there ("-10 ms"), and the
 * anchor itself has none; else they are positions ("6.25 s").
 */
export function timeTicks(fromS: number, toS: number, most: number, anchorS?: number): Tick[] {
  const spanS = toS - fromS;
  if (!(spanS > 0) || most < 1) return [];
  const step = niceStep(spanS / most);
  const zero = anchorS ?? 0;
  const first = Math.ceil((fromS - zero) / step - 1e-6);
  const last = Math.floor((toS - zero) / step + 1e-6);
  const ticks: Tick[] = [];
  for (let k = first; k <= last; k++) {
    if (anchorS !== undefined && k === 0) continue;
    ticks.push({
      s: zero + k * step,
      label: secondsText(k * step, step, anchorS === undefined ? Math.max(1, toS) : spanS),
    });
  }
  return ticks;
}

/** A position or duration, digits as `step` needs them, in the unit that suits `magnitude`; true minus. */
export function secondsText(s: number, step: number, magnitude = Math.abs(s)): string {
  const [factor, unit] = magnitude < 1e-3 ? [1e6, 'µs'] : magnitude < 1 ? [1e3, 'ms'] : [1, 's'];
  const digits = Math.min(6, Math.max(0, Math.ceil(-Math.log10(step * factor) - 1e-9)));
  const text = Math.abs(s * factor).toFixed(digits);
  return `${s < 0 && Number(text) !== 0 ? '\u2212' : ''}${text} ${unit}`;
}

/** A duration by itself: three significant digits at most, "2.4 ms", "12 s", "1 min 5 s". */
export function durationText(s: number): string {
  if (s >= 60) {
    const whole = Math.round(s);
    return whole % 60 === 0 ? `${whole / 60} min` : `${Math.floor(whole / 60)} min ${whole % 60} s`;
  }
  const [value, unit] = s < 0.9995e-3 ? [s * 1e6, 'µs'] : s < 0.9995 ? [s * 1e3, 'ms'] : [s, 's'];
  return `${Number(value.toPrecision(3))} ${unit}`;
}
