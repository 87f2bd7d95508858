/** A stretch of a capture, s from its first sample. */
export type Window = { fromS: number; toS: number };

export const spanOf = ({ fromS, toS }: Window): number => toS - fromS;

/** Within the capture, neither shorter than `leastS` nor longer than the capture. */
export function clampWindow({ fromS, toS }: Window, durationS: number, leastS: number): Window {
  const span = Math.min(durationS, Math.max(leastS, toS - fromS));
  const from = Math.min(Math.max(0, fromS), durationS - span);
  return { fromS: from, toS: from + span };
}

/** Zooms by `factor` (below 1: closer) and leaves `aboutS` where it stands on the screen. */
export function zoomAbout(
  window: Window,
  factor: number,
  aboutS: number,
  durationS: number,
  leastS: number,
): Window {
  const span = Math.min(durationS, Math.max(leastS, spanOf(window) * factor));
  const share = (aboutS - window.fromS) / spanOf(window);
  const fromS = aboutS - share * span;
  return clampWindow({ fromS, toS: fromS + span }, durationS, leastS);
}

export function panBy(window: Window, byS: number, durationS: number): Window {
  return clampWindow({ fromS: window.fromS + byS, toS: window.toS + byS }, durationS, 0);
}

/** Moves the window so that `s` is in it: while playing the cursor runs to three quarters, then the picture moves. */
export function follow(window: Window, s: number, durationS: number): Window {
  const span = spanOf(window);
  if (s >= window.fromS && s <= window.fromS + 0.75 * span) return window;
  if (s > window.toS || s < window.fromS) return centreOn(window, s, durationS);
  return clampWindow({ fromS: s - 0.75 * span, toS: s + 0.25 * span }, durationS, 0);
}

export function centreOn(window: Window, s: number, durationS: number): Window {
  const half = spanOf(window) / 2;
  return clampWindow({ fromS: s - half, toS: s + half }, durationS, 0);
}

/** The same where `s` is in sight already. */
export function reveal(window: Window, s: number, durationS: number): Window {
  return s >= window.fromS && s <= window.toS ? window : centreOn(window, s, durationS);
}

export type Fetch = { fromS: number; toS: number; points: number };

/**
 * What to fetch for a window: a stretch on a grid of powers of two around it, so that panning and playing ask anew only
 * now and then, at one column a px of the window.
 */
export function fetchFor(window: Window, widthPx: number, durationS: number): Fetch {
  const cell = 2 ** Math.ceil(Math.log2(Math.max(spanOf(window), 1e-6)));
  const k = Math.floor(window.fromS / cell);
  const fromS = Math.max(0, (k - 0.5) * cell);
  const toS = Math.min(durationS, (k + 2.5) * cell);
  const pxPerCell = Math.ceil((widthPx * cell) / spanOf(window) / 200) * 200;
  const points = Math.min(20_000, Math.max(200, Math.ceil((pxPerCell * (toS - fromS)) / cell)));
  return { fromS, toS, points };
}

export const playRates = [0.001, 0.01, 0.05, 0.25, 1] as const;

/** Slow enough that the window takes some seconds to pass. */
export function sensibleRate(spanS: number): number {
  return [...playRates].reverse().find((rate) => spanS / rate >= 2) ?? playRates[0];
}

/** The neighbour of `s` in sorted instants; null at the end. */
export function neighbourOf(instants: readonly number[], s: number, way: 1 | -1): number | null {
  const apart = 1e-9;
  let low = 0;
  let high = instants.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (instants[middle]! <= s + (way > 0 ? apart : -apart)) low = middle + 1;
    else high = middle;
  }
  return (way > 0 ? instants[low] : instants[low - 1]) ?? null;
}
