export type Point = { x: number; y: number };

export type PinchMove = { factor: number; aboutX: number; panPx: number };

/** Two fingers before and after: how much closer or wider, about which px, and how far both moved. */
export function pinchMove(before: readonly [Point, Point], after: readonly [Point, Point]): PinchMove {
  const spread = ([a, b]: readonly [Point, Point]) => Math.max(12, Math.hypot(a.x - b.x, a.y - b.y));
  const middle = ([a, b]: readonly [Point, Point]) => (a.x + b.x) / 2;
  return {
    factor: spread(before) / spread(after),
    aboutX: middle(after),
    panPx: middle(after) - middle(before),
  };
}

/** One notch of a wheel (about 100) zooms by a quarter; trackpads send less and zoom less. */
export function wheelFactor(deltaY: number): number {
  return Math.exp(Math.max(-1, Math.min(1, deltaY / 100)) * 0.25);
}

export type KeyMove =
  | { kind: 'step'; spans: number }
  | { kind: 'jump'; way: 1 | -1 }
  | { kind: 'zoom'; factor: number }
  | { kind: 'to'; end: 'start' | 'end' }
  | { kind: 'play' };

/** What a key does on the ribbon or the overview; `spans` in widths of the window. */
export function keyMove(key: string, shift: boolean): KeyMove | null {
  switch (key) {
    case 'ArrowRight':
    case 'ArrowUp':
      return { kind: 'step', spans: shift ? 0.25 : 0.02 };
    case 'ArrowLeft':
    case 'ArrowDown':
      return { kind: 'step', spans: shift ? -0.25 : -0.02 };
    case 'PageUp':
      return { kind: 'step', spans: 1 };
    case 'PageDown':
      return { kind: 'step', spans: -1 };
    case 'Home':
      return { kind: 'to', end: 'start' };
    case 'End':
      return { kind: 'to', end: 'end' };
    case '.':
      return { kind: 'jump', way: 1 };
    case ',':
      return { kind: 'jump', way: -1 };
    case '+':
    case '=':
      return { kind: 'zoom', factor: 0.5 };
    case '-':
      return { kind: 'zoom', factor: 2 };
    case ' ':
      return { kind: 'play' };
    default:
      return null;
  }
}
