import { describe, expect, it } from 'vitest';
import { countText } from '@/client/drawings/count-text';

describe('countText', () => {
  it.each([
    [0, 'no gaps'],
    [1, '1 gap'],
    [2, '2 gaps'],
  ])('%d reads %s', (count, text) => {
    expect(countText(count, 'gap')).toBe(text);
  });
  it('knows a plural of its own', () => {
    expect(countText(1, 'tooth', 'teeth')).toBe('1 tooth');
    expect(countText(24, 'tooth', 'teeth')).toBe('24 teeth');
  });
});
