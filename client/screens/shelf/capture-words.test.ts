import { describe, expect, it } from 'vitest';
import { captureHealth, lengthWords, tagsOf } from '@/client/screens/shelf/capture-words';

describe('captureHealth', () => {
  it('names the worst, whatever there is most of', () => {
    const findings = [
      { code: 'missing-tooth', severity: 'warn', count: 40 },
      { code: 'lost-samples', severity: 'fault', count: 1 },
    ] as const;
    expect(captureHealth([...findings])).toEqual({ status: 'fault', word: 'lost samples, 40 more' });
  });

  it('says so when there is one, and when there is none', () => {
    expect(captureHealth([{ code: 'clipping', severity: 'note', count: 1 }])).toEqual({
      status: 'note',
      word: 'clipping',
    });
    expect(captureHealth([])).toEqual({ status: 'good', word: 'no findings' });
  });
});

describe('lengthWords', () => {
  it.each([
    [0.82, '0.8 s'],
    [99.94, '99.9 s'],
    [200, '3 min 20 s'],
    [119.9, '2 min'],
    [600, '10 min'],
  ])('%d s reads %s', (seconds, words) => {
    expect(lengthWords(seconds)).toBe(words);
  });
});

describe('tagsOf', () => {
  it('puts the most used first', () => {
    const tags = (...names: string[]) => ({ tags: names });
    expect(tagsOf([tags('b', 'a'), tags('c', 'b'), tags('a', 'b')])).toEqual(['b', 'a', 'c']);
  });
});
