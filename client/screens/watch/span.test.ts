import { describe, expect, it } from 'vitest';
import { canStep, firstSpan, spanText, stepSpan, switchUnit, wishOf } from '@/client/screens/watch/span';

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
    expect(spanText(time, 'single')).toBe('10 ms');
    expect(wishOf(stepSpan(time, 1), 900)).toEqual({ spanS: 0.02, columns: 900, anchor: 'edge' });
  });
  it('asks for a stretch around an instant only where one is wanted', () => {
    expect(wishOf(firstSpan, 300, 12.5)).toMatchObject({ teeth: 7, atS: 12.5 });
    expect(wishOf(firstSpan, 300)).not.toHaveProperty('atS');
  });
  it('keeps the wish within what the hub takes', () => {
    expect(wishOf(firstSpan, 9000).columns).toBe(2000);
    expect(wishOf(firstSpan, 10).columns).toBe(100);
  });
});
