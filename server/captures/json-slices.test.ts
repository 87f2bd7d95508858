import { describe, expect, it } from 'vitest';
import { jsonSlices } from './json-slices';

describe('jsonSlices', () => {
  it.each([
    ['nothing', {}],
    ['an empty list', { a: [] }],
    ['short and nested', { a: [1, { b: null }], c: { d: 'x"y', e: undefined, f: false } }],
    ['a list of several slices', { long: Array.from({ length: 4_001 }, (_, i) => ({ t: i / 3 })), after: 1 }],
    ['a list that fills its slices', { long: Array.from({ length: 4_000 }, (_, i) => i) }],
    ['a long list alone', Array.from({ length: 2_001 }, (_, i) => [i])],
  ])('joins to what JSON.stringify gives: %s', (_name, value) => {
    expect([...jsonSlices(value)].join('')).toBe(JSON.stringify(value));
  });

  it('keeps each slice short', () => {
    const value = { edges: Array.from({ length: 50_000 }, (_, i) => ({ t: i, rising: true })) };
    expect(Math.max(...[...jsonSlices(value)].map((slice) => slice.length))).toBeLessThan(100_000);
  });
});
