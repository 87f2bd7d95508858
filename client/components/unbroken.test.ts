import { describe, expect, it } from 'vitest';
import { unbroken } from '@/client/components/unbroken';

describe('unbroken', () => {
  it.each([
    ['steady within 4.4 rpm/s', 'steady within 4.4\u00a0rpm/s'],
    ['120.4 ± 2.2 rpm', '120.4 ±\u00a02.2\u00a0rpm'],
    ['rise and fall, 10 to 90 %', 'rise and fall, 10 to 90\u00a0%'],
    ['0.2 V and 3.2 V', '0.2\u00a0V and 3.2\u00a0V'],
    ['over 12 s', 'over 12\u00a0s'],
    ['3 skips', '3 skips'],
    ['24 seen', '24 seen'],
  ])('%s', (text, kept) => {
    expect(unbroken(text)).toBe(kept);
  });
});
