import { describe, expect, it } from 'vitest';
import { FormerLevels } from '@/signal/former-levels';
import { createLevels } from '@/signal/levels';

/** Has seen `edges` whole teeth between these levels, V. */
function turned(edges: number, lowV = 1, highV = 4) {
  const levels = { ...createLevels(), lowV, highV };
  const former = new FormerLevels();
  const go = (count: number, low: number, high: number) => {
    Object.assign(levels, { lowV: low, highV: high });
    for (let k = 0; k < count; k++) former.isBack(levels, k % 2 === 0, k % 2 === 0 ? low : high, high - low);
  };
  go(edges, lowV, highV);
  return { levels, former, go };
}

describe('the levels of whole teeth', () => {
  it('hold again once a trough or peak comes as far as theirs', () => {
    const { levels, former, go } = turned(8);
    go(100, 3.2, 4.1);
    expect(former.isBack(levels, true, 1.1, 3)).toBe(true);
    expect(levels).toMatchObject({ lowV: 1, highV: 4 });
    expect(former.isBack(levels, true, 1.1, 3)).toBe(false);
    Object.assign(levels, { lowV: 0.9, highV: 2.5 });
    expect(former.isBack(levels, true, 0.9, 1.6)).toBe(false);
    expect(former.isBack(levels, false, 3.8, 3)).toBe(true);
    expect(levels).toMatchObject({ lowV: 1, highV: 4 });
  });

  it('are not known after a few teeth, and move with those of the same size', () => {
    const few = turned(7);
    Object.assign(few.levels, { lowV: 3 });
    expect(few.former.isBack(few.levels, true, 1, 2)).toBe(false);
    const moved = turned(8);
    moved.go(8, 3, 6);
    Object.assign(moved.levels, { lowV: 5 });
    expect(moved.former.isBack(moved.levels, true, 3, 2)).toBe(true);
    expect(moved.levels).toMatchObject({ lowV: 3, highV: 6 });
  });

  it('are smaller ones where those stay', () => {
    const { levels, former, go } = turned(8);
    go(1020, 1, 2);
    expect(former.isBack(levels, false, 4, 3)).toBe(false);
    const less = turned(8);
    less.go(63, 1, 3.4);
    Object.assign(less.levels, { highV: 2 });
    expect(less.former.isBack(less.levels, false, 4, 3)).toBe(true);
    less.go(64, 1, 3.4);
    Object.assign(less.levels, { highV: 2 });
    expect(less.former.isBack(less.levels, false, 4, 3)).toBe(true);
    expect(less.levels).toMatchObject({ highV: 3.4 });
  });
});
