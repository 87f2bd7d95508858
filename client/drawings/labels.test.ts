import { describe, expect, it } from 'vitest';
import { spreadLabels, voltsText } from '@/client/drawings/labels';

const at = (...ys: number[]) => ys.map((y) => ({ y }));

describe('spreadLabels', () => {
  it('leaves what has room', () => {
    expect(spreadLabels(at(10, 50), 14, 0, 100).map((l) => l.y)).toEqual([10, 50]);
  });
  it('moves neighbours apart about their middle', () => {
    expect(spreadLabels(at(50, 54), 14, 0, 100).map((l) => l.y)).toEqual([45, 59]);
  });
  it('keeps inside and never nearer than the gap', () => {
    const ys = spreadLabels(at(98, 99, 100, 97), 14, 0, 100).map((l) => l.y);
    expect(ys.at(-1)).toBe(100);
    for (let i = 1; i < ys.length; i++) expect(ys[i]! - ys[i - 1]!).toBeGreaterThanOrEqual(14 - 1e-6);
  });
  it('leaves out the last listed where there is no room', () => {
    const kept = spreadLabels(
      [
        { y: 5, name: 'operate' },
        { y: 6, name: 'low' },
      ],
      14,
      0,
      10,
    );
    expect(kept.map((l) => l.name)).toEqual(['operate']);
  });
});

describe('voltsText', () => {
  it('has the digits that the range needs', () => {
    expect(voltsText(1.916, 2.5)).toBe('1.92');
    expect(voltsText(-11.96, 24)).toBe('\u221212');
    expect(voltsText(-0.0001, 1)).toBe('0.00');
  });
});
