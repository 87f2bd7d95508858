import { describe, expect, it } from 'vitest';
import { bandPaths } from '@/client/drawings/band-paths';
import { timeScale } from '@/client/drawings/time-axis';

const time = timeScale(0, 10, 0, 100);
const y = (v: number) => 100 - v * 10;

describe('bandPaths', () => {
  it('draws strip and both edges, cut to the window', () => {
    expect(bandPaths([{ from: -5, to: 50, operateV: 3, releaseV: 2 }], [], time, y)).toEqual({
      strip: 'M0.0 70.0H100.0V80.0H0.0Z',
      borders: 'M0.0 70.0H100.0M0.0 80.0H100.0',
    });
  });
  it('draws nothing inside of a gap', () => {
    const { strip } = bandPaths(
      [{ from: 0, to: 10, operateV: 3, releaseV: 2 }],
      [{ from: 4, to: 6 }],
      time,
      y,
    );
    expect(strip).toBe('M0.0 70.0H40.0V80.0H0.0ZM60.0 70.0H100.0V80.0H60.0Z');
  });
  it('steps where the band moves', () => {
    const bands = [
      { from: 0, to: 5, operateV: 3, releaseV: 2 },
      { from: 5, to: 10, operateV: 4, releaseV: 2 },
    ];
    expect(bandPaths(bands, [], time, y).borders.match(/M/g)).toHaveLength(4);
  });
});
