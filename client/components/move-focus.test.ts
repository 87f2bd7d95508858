import { describe, expect, it } from 'vitest';
import { targetIndex } from '@/client/components/move-focus';

describe('targetIndex', () => {
  it('wraps at both ends', () => {
    expect(targetIndex('ArrowRight', 2, 3)).toBe(0);
    expect(targetIndex('ArrowLeft', 0, 3)).toBe(2);
  });
  it('jumps to the ends', () => {
    expect(targetIndex('Home', 2, 3)).toBe(0);
    expect(targetIndex('End', 0, 3)).toBe(2);
  });
  it('leaves other keys alone', () => {
    expect(targetIndex('Enter', 0, 3)).toBeNull();
    expect(targetIndex('ArrowRight', -1, 3)).toBeNull();
  });
});
