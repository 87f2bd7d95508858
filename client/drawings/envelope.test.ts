import { describe, expect, it } from 'vitest';
import { envelopePaths, isDense } from '@/client/drawings/envelope';
import { timeScale } from '@/client/drawings/time-axis';

const time = timeScale(0, 10, 0, 100);
const y = (v: number) => 100 - v * 10;
const columns = (min: (number | null)[], max: (number | null)[]) => ({ firstS: 0, stepS: 1, min, max });

describe('isDense', () => {
  const range = { lowV: 0, highV: 3 };
  it('is when most columns hold a good part of the swing', () => {
    expect(isDense(columns([0, 0, 0], [3, 3, 3]), time, range)).toBe(true);
    expect(isDense(columns([0, 1, 2], [0.1, 1.1, 2.1]), time, range)).toBe(false);
  });
  it('is not where nothing is known', () => {
    expect(isDense(columns([null], [null]), time, range)).toBe(false);
  });
});

describe('envelopePaths', () => {
  it('closes a surface and draws its two borders, broken at missing samples', () => {
    const { fill, outline } = envelopePaths(columns([0, 1, null, 2], [3, 4, null, 5]), time, y);
    expect(fill).toBe('M0.0 70.0L10.0 60.0L10.0 90.0L0.0 100.0ZM30.0 50.0L30.0 80.0Z');
    expect(outline.match(/M/g)).toHaveLength(4);
  });
});
