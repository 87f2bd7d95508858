import { describe, expect, it } from 'vitest';
import { FormerLevels } from '@/signal/former-levels';
import { createLevels } from '@/signal/levels';

/** Levels of 1 V to 4 V that a hunt has replaced by others. */
function replaced(lowV: number, highV: number) {
  const levels = { ...createLevels(), lowV: 1, highV: 4 };
  const former = new FormerLevels();
  former.keep(levels, lowV, highV);
  levels.lowV = lowV;
  levels.highV = highV;
  return { levels, former };
}

describe('levels that were known before smaller ones', () => {
  it('hold again once a tooth comes as far as they did', () => {
    const { levels, former } = replaced(3.2, 4.1);
    expect(former.isBack(levels, false, 4.2)).toBe(false);
    expect(former.isBack(levels, true, 3)).toBe(false);
    expect(former.isBack(levels, true, 1.1)).toBe(true);
    expect(levels).toMatchObject({ lowV: 1, highV: 4 });
    expect(former.isBack(levels, true, 1.1)).toBe(false);
  });

  it('are those from before the first of several small swings', () => {
    const { levels, former } = replaced(3.2, 4.1);
    former.keep(levels, 1, 1.8);
    levels.lowV = 1;
    levels.highV = 1.8;
    expect(former.isBack(levels, true, 0.9)).toBe(false);
    expect(former.isBack(levels, false, 3.9)).toBe(true);
    expect(levels).toMatchObject({ lowV: 1, highV: 4 });
  });

  it('are gone after many teeth of the smaller swing, and where the new ones are not small', () => {
    const { levels, former } = replaced(1, 2);
    for (let k = 0; k < 200; k++) expect(former.isBack(levels, k % 2 === 0, k % 2 === 0 ? 1 : 2)).toBe(false);
    expect(former.isBack(levels, false, 4)).toBe(false);
    const moved = replaced(3, 6);
    expect(moved.former.isBack(moved.levels, true, 1)).toBe(false);
  });
});
