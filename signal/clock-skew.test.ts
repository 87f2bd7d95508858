import { describe, expect, it } from 'vitest';
import { ClockSkew } from '@/signal/clock-skew';

/** Ten blocks a second of a board that runs `ppm` fast; `lateS(k)`: how long block k is under way. */
function watched(ppm: number, seconds: number, lateS: (k: number) => number): ClockSkew {
  const skew = new ClockSkew();
  for (let k = 1; k <= seconds * 10; k++) skew.add((k / 10) * (1 + ppm * 1e-6), 1000 + k / 10 + lateS(k));
  return skew;
}

/** Mostly quick, now and then slow: like a network. */
const network = (k: number) => 0.002 + 0.03 * Math.abs(Math.sin(k * 12.9898)) ** 6 + (k % 97 === 0 ? 0.4 : 0);

describe('skew of a board clock', () => {
  it('is not said before half a minute', () => {
    expect(watched(500, 25, network).fit()).toBeNull();
    expect(watched(500, 60, network).fit()).not.toBeNull();
  });

  it.each([-20_000, -400, 0, 50, 1000, 30_000])('of %d ppm is found within its stated error', (ppm) => {
    const { ppm: found, errorPpm, overS } = watched(ppm, 200, network).fit()!;
    expect(Math.abs(found - ppm)).toBeLessThan(Math.max(4 * errorPpm, 0.002 * Math.abs(ppm)));
    expect(errorPpm).toBeLessThan(20);
    expect(overS).toBeGreaterThan(180);
  });

  it('is not bent by a minute of blocks that come late all together', () => {
    const { ppm } = watched(0, 240, (k) => network(k) + (k > 1500 && k < 2000 ? 1.5 : 0)).fit()!;
    expect(Math.abs(ppm)).toBeLessThan(60);
  });

  it('begins anew after a long silence', () => {
    const skew = watched(800, 100, network);
    skew.add(100, 1200);
    expect(skew.fit()).toBeNull();
  });
});
