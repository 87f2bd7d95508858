import { describe, expect, it } from 'vitest';
import { keepChoices, keepWords, lookbackWords } from '@/client/components/keep-words';

describe('keeping', () => {
  it('offers what the lookback holds, and all of it', () => {
    expect(keepChoices(600).map((c) => c.label)).toEqual(['5 s', '10 s', '20 s', '60 s', '120 s', 'all']);
    expect(keepChoices(30).map((c) => c.label)).toEqual(['5 s', '10 s', '20 s', 'all']);
    expect(keepChoices(0).map((c) => c.label)).toEqual(['5 s']);
  });
  it('says what one press does', () => {
    expect(keepWords(20, 600)).toBe('Keep the last 20 s');
    expect(keepWords(3600, 600)).toBe('Keep all 10 min');
  });
  it('writes durations as people say them', () => {
    expect(lookbackWords(600)).toBe('10 min');
    expect(lookbackWords(95.7)).toBe('1 min 35 s');
    expect(lookbackWords(12)).toBe('12 s');
  });
});
