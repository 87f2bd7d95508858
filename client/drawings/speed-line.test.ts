import { describe, expect, it } from 'vitest';
import {
  sparkRange,
  speedAt,
  speedExtremes,
  speedLabels,
  speedPath,
  zeroRange,
} from '@/client/drawings/speed-line';

const x = (t: number) => t * 10;
const y = (rpm: number) => 100 - rpm;

describe('speedPath', () => {
  it('breaks at unknown stretches', () => {
    const d = speedPath(
      [
        { t: 0, rpm: 1 },
        { t: 1, rpm: null },
        { t: 2, rpm: 3 },
      ],
      x,
      y,
    );
    expect(d).toBe('M0.0 99.0h.01M20.0 97.0h.01');
  });
  it('breaks at gaps', () => {
    const d = speedPath(
      [
        { t: 0, rpm: 1 },
        { t: 1, rpm: 2 },
        { t: 2, rpm: 3 },
      ],
      x,
      y,
      [1.5],
    );
    expect(d.match(/M/g)).toHaveLength(2);
  });
  it('keeps the extremes of a crowded column', () => {
    const points = Array.from({ length: 1000 }, (_, i) => ({ t: i / 1e5, rpm: i === 500 ? 90 : 10 }));
    const d = speedPath(points, x, y);
    expect(d).toContain('10.0');
    expect(d.length).toBeLessThan(80);
  });
});

describe('ranges', () => {
  it('finds the extremes of what is known', () => {
    expect(
      speedExtremes([
        { t: 0, rpm: null },
        { t: 1, rpm: -5 },
        { t: 2, rpm: 7 },
      ]),
    ).toEqual({ low: -5, high: 7 });
    expect(speedExtremes([{ t: 0, rpm: null }])).toBeNull();
  });
  it('does not blow ripple up', () => {
    const range = sparkRange({ low: 1499, high: 1501 });
    expect(range.high - range.low).toBeGreaterThan(30);
  });
  it('holds the zero line', () => {
    expect(zeroRange({ low: 1000, high: 1500 }).low).toBeLessThan(0);
    expect(zeroRange({ low: -300, high: -100 }).high).toBeGreaterThan(0);
  });
});

describe('speedAt', () => {
  const points = [
    { t: 1, rpm: 10 },
    { t: 2, rpm: null },
    { t: 3, rpm: 30 },
  ];
  it('holds the last entry', () => {
    expect(speedAt(points, 0.5)).toBeNull();
    expect(speedAt(points, 1.5)).toBe(10);
    expect(speedAt(points, 2.5)).toBeNull();
    expect(speedAt(points, 99)).toBe(30);
  });
});

describe('speedLabels', () => {
  // Ten px to a hundred rpm, zero at 50.
  const y = (rpm: number) => 50 - rpm / 10;
  const texts = (low: number, high: number) =>
    speedLabels({ low, high }, y, 0, 100)
      .sort((a, b) => a.y - b.y)
      .map((label) => label.text);
  it('says the fastest, the unit and zero, each in a place of its own', () => {
    expect(texts(0, 412.34)).toEqual(['412', 'rpm', '0']);
    expect(texts(-250, 300)).toEqual(['300', 'rpm', '0', '\u2212250']);
    expect(texts(-81.84, -12)).toEqual(['0', 'rpm', '\u221281.8']);
    const placed = speedLabels({ low: 0, high: 60 }, y, 0, 100).map((label) => label.y);
    expect(Math.min(...placed.slice(1).map((at, i) => at - placed[i]!))).toBeGreaterThanOrEqual(14);
  });
  it('has zero and the unit where no speed is known', () => {
    const labels = speedLabels(null, y, 0, 100).map((label) => label.text);
    expect(labels.sort()).toEqual(['0', 'rpm']);
  });
});
