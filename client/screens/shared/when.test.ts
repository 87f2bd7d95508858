import { describe, expect, it } from 'vitest';
import { shortInstant, shortSpan } from '@/client/screens/shared/when';

describe('shortInstant', () => {
  const noon = new Date(2026, 2, 5, 12, 0).getTime();
  const at = (year: number, month: number, day: number) => new Date(year, month, day, 9, 5).toISOString();

  it('gives the time today, the day this year, the year before', () => {
    expect(shortInstant(at(2026, 2, 5), noon, 'en-GB')).toBe('09:05');
    expect(shortInstant(at(2026, 2, 5), noon, 'en-US')).toBe('9:05\u00a0AM');
    expect(shortInstant(at(2026, 0, 31), noon, 'en-GB')).toBe('31 Jan 09:05');
    expect(shortInstant(at(2025, 11, 31), noon, 'en-GB')).toBe('31 Dec 2025');
  });
});

describe('shortSpan', () => {
  it.each([
    [0.42, '0.4 s'],
    [12.4, '12 s'],
    [99.4, '99 s'],
    [180, '3 min'],
    [7200, '2 h'],
    [777_600, '9 d'],
  ])('%d s reads %s', (seconds, text) => {
    expect(shortSpan(seconds)).toBe(text);
  });
});
