import { describe, expect, it } from 'vitest';
import { home, safeReturn } from '@/client/screens/sign-in/safe-return';

describe('safeReturn', () => {
  it.each(['/rigs/abc', '/shelf/x1?t=3.2', '/shelf?tag=two%20words#top'])('goes back to %s', (path) => {
    expect(safeReturn(path)).toBe(path);
  });

  it.each([
    'https://elsewhere.example/',
    '//elsewhere.example',
    '/\\elsewhere.example',
    '\\\\elsewhere.example',
    '/\t/elsewhere.example',
    '/..//elsewhere.example',
    'javascript:alert(1)',
    ' //elsewhere.example',
    'rigs',
    '',
    '/',
    '/sign-in',
    '/sign-in?to=/sign-in',
    undefined,
    ['/rigs/abc'],
  ])('does not follow %j', (path) => {
    expect(safeReturn(path)).toBe(home);
  });
});
