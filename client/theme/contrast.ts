/** Relative luminance of `#rrggbb`, WCAG 2.2. */
export function luminance(hex: string): number {
  const [r, g, b] = [1, 3, 5].map((at) => linear(parseInt(hex.slice(at, at + 2), 16) / 255));
  return 0.2126 * r! + 0.7152 * g! + 0.0722 * b!;
}

/** Contrast ratio of two `#rrggbb` colours, 1 to 21, WCAG 2.2 (SC 1.4.3). */
export function contrast(a: string, b: string): number {
  const [la, lb] = [luminance(a), luminance(b)];
  return (Math.max(la, lb) + 0.05) / (Math.min(la, lb) + 0.05);
}

/** `rgba(r,g,b,alpha)` laid over an opaque `#rrggbb`, as `#rrggbb`. */
export function over(rgba: string, ground: string): string {
  const [r, g, b, alpha] = rgba.match(/[\d.]+/g)!.map(Number) as [number, number, number, number];
  const mixed = [r, g, b].map((part, i) => {
    const below = parseInt(ground.slice(1 + 2 * i, 3 + 2 * i), 16);
    return Math.round(part * alpha + below * (1 - alpha));
  });
  return `#${mixed.map((part) => part.toString(16).padStart(2, '0')).join('')}`;
}

function linear(c: number): number {
  return c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4;
}
