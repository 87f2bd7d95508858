import { describe, expect, it } from 'vitest';
import {
  canStep,
  firstSpan,
  spanHolding,
  spanText,
  stepSpan,
  switchUnit,
  wishOf,
} from '@/client/screens/watch/span';

describe('span', () => {
  it('starts with 4 to 8 teeth, still on the tooth', () => {
    expect(firstSpan.teeth).toBeGreaterThanOrEqual(4);
    expect(firstSpan.teeth).toBeLessThanOrEqual(8);
    expect(wishOf(firstSpan, 326)).toEqual({ teeth: 7, columns: 400, anchor: 'edge' });
  });
  it('steps through teeth and stops at the ends', () => {
    expect(stepSpan(firstSpan, 1).teeth).toBe(12);
    expect(canStep({ ...firstSpan, teeth: 2 }, -1)).toBe(false);
    expect(canStep({ ...firstSpan, teeth: 200 }, 1)).toBe(false);
  });
  it('changes to time at about what is shown', () => {
    const time = switchUnit(firstSpan, 0.0117);
    expect(time).toMatchObject({ unit: 'time', spanS: 0.01 });
    expect(spanText(time)).toBe('10 ms');
    expect(wishOf(stepSpan(time, 1), 900)).toEqual({ spanS: 0.02, columns: 900, anchor: 'edge' });
  });
  it('reaches back to an instant, up to a minute', () => {
    expect(spanHolding(firstSpan, 3)).toMatchObject({ unit: 'time', spanS: 5, anchor: 'now' });
    expect(spanHolding(firstSpan, 300).spanS).toBe(60);
  });
  it('keeps the wish within what the hub takes', () => {
    expect(wishOf(firstSpan, 9000).columns).toBe(2000);
    expect(wishOf(firstSpan, 10).columns).toBe(100);
  });
});
