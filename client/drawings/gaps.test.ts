import { describe, expect, it } from 'vitest';
import { tornEdge, withoutGaps } from '@/client/drawings/gaps';

describe('withoutGaps', () => {
  it('cuts gaps out, whatever their order', () => {
    expect(
      withoutGaps({ from: 0, to: 10 }, [
        { from: 6, to: 7 },
        { from: 2, to: 3 },
      ]),
    ).toEqual([
      { from: 0, to: 2 },
      { from: 3, to: 6 },
      { from: 7, to: 10 },
    ]);
  });
  it('handles gaps over the borders and overlapping ones', () => {
    expect(
      withoutGaps({ from: 0, to: 10 }, [
        { from: -1, to: 2 },
        { from: 1, to: 4 },
        { from: 9, to: 12 },
      ]),
    ).toEqual([{ from: 4, to: 9 }]);
  });
  it('leaves nothing of a window inside a gap', () => {
    expect(withoutGaps({ from: 3, to: 4 }, [{ from: 0, to: 10 }])).toEqual([]);
  });
});

describe('tornEdge', () => {
  it('starts and ends on the line', () => {
    const d = tornEdge(50, 0, 60);
    expect(d.startsWith('M50.0 0.0')).toBe(true);
    expect(d.endsWith('L50.0 60.0')).toBe(true);
  });
});
