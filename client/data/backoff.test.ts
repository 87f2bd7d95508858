import { describe, expect, it } from 'vitest';
import { backoffLimits, backoffMs } from '@/client/data/backoff';

describe('backoffMs', () => {
  it('doubles up to the longest wait', () => {
    const waits = [0, 1, 2, 3, 4, 5, 6, 500].map((attempt) => backoffMs(attempt, 1));
    expect(waits).toEqual([500, 1000, 2000, 4000, 8000, 15000, 15000, 15000]);
  });

  it('spreads over the upper half', () => {
    expect(backoffMs(2, 0)).toBe(1000);
    expect(backoffMs(2, 0.5)).toBe(1500);
    expect(backoffMs(99, 0)).toBe(backoffLimits.longestMs / 2);
  });
});
