import { describe, expect, it } from 'vitest';
import { mergeWishes, mostRigs } from '@/client/data/live-wishes';

const small = { columns: 60, teeth: 4 };
const big = { columns: 900, teeth: 6 };

describe('mergeWishes', () => {
  it('asks for a rig once, with detail where anyone wants it', () => {
    const merged = mergeWishes([
      { rigId: 'a', ribbon: small, detail: false },
      { rigId: 'a', ribbon: null, detail: true },
    ]);
    expect(merged.rigs).toEqual([{ rigId: 'a', ribbon: small, detail: true }]);
  });

  it('takes the newest ribbon', () => {
    const wish = (ribbon: typeof small) => ({ rigId: 'a', ribbon, detail: false });
    expect(mergeWishes([wish(small), wish(big)]).rigs[0]?.ribbon).toEqual(big);
    expect(mergeWishes([wish(big), wish(small)]).rigs[0]?.ribbon).toEqual(small);
  });

  it('asks for no more rigs than the hub takes', () => {
    const wishes = Array.from({ length: mostRigs + 5 }, (_, i) => ({
      rigId: `${i}`,
      ribbon: null,
      detail: false,
    }));
    const { rigs } = mergeWishes(wishes);
    expect(rigs).toHaveLength(mostRigs);
    expect(rigs.at(-1)?.rigId).toBe(`${mostRigs + 4}`);
  });
});
