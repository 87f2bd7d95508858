import { describe, expect, it } from 'vitest';
import { durationText, niceStep, secondsText, timeScale, timeTicks } from '@/client/drawings/time-axis';

describe('timeScale', () => {
  it('maps both ways', () => {
    const scale = timeScale(2, 4, 50, 250);
    expect(scale.x(3)).toBe(150);
    expect(scale.s(150)).toBe(3);
  });
});

describe('ticks', () => {
  it('steps by 1, 2 or 5', () => {
    expect(niceStep(0.0031)).toBeCloseTo(0.005, 12);
    expect(niceStep(2)).toBe(2);
    expect(niceStep(7)).toBe(10);
  });
  it('counts back from the anchor and leaves it free', () => {
    const ticks = timeTicks(10 - 0.0117, 10, 4, 10);
    expect(ticks.map((t) => t.label)).toEqual(['\u221210 ms', '\u22125 ms']);
    expect(ticks[0]!.s).toBeCloseTo(9.99, 9);
  });
  it('writes positions with the digits that the step needs', () => {
    expect(timeTicks(6.2, 6.6, 4).map((t) => t.label)).toEqual(['6.2 s', '6.3 s', '6.4 s', '6.5 s', '6.6 s']);
    expect(timeTicks(6.2, 6.2004, 2).map((t) => t.label)).toEqual(['6.2000 s', '6.2002 s', '6.2004 s']);
  });
  it('writes positions in seconds from the first one on, as the cursor has them', () => {
    expect(timeTicks(0, 0.02, 2).map((t) => t.label)).toEqual(['0.00 s', '0.01 s', '0.02 s']);
  });
  it('has none for an empty stretch', () => {
    expect(timeTicks(1, 1, 4)).toEqual([]);
  });
});

describe('texts', () => {
  it.each([
    [0.0024, '2.4 ms'],
    [0.0000124, '12.4 µs'],
    [12, '12 s'],
    [65, '1 min 5 s'],
    [600, '10 min'],
    [0.9999, '1 s'],
  ])('%f s is %s', (s, text) => {
    expect(durationText(s)).toBe(text);
  });
  it('has no negative zero', () => {
    expect(secondsText(-0.0000001, 0.1, 5)).toBe('0.0 s');
  });
});
