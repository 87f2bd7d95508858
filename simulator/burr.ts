/** What stands on a wheel's rim where nothing should: a burr at one place, or a chip that sits elsewhere each turn. */
import { subSeed, uniformAt } from '@/simulator/random';

export type Burr = {
  /** Place in positions; null: another one each turn. */
  at: number | null;
  /** Share of the turns in which it is there. */
  share: number;
  /** 1: as high as a tooth. */
  strength: number;
  /** Share of a pitch over which it is felt. */
  width: number;
};

/** How high the burrs stand before the sensor, 1 = a tooth, at so many turns of a wheel of `n` positions. */
export function createBurrHeight(n: number, seed: number): (burrs: readonly Burr[], turns: number) => number {
  const whereSeed = subSeed(seed, 'burr place');
  const whetherSeed = subSeed(seed, 'burr share');
  return (burrs, turns) => {
    const turn = Math.floor(turns);
    const x = (turns - turn) * n;
    let height = 0;
    for (const { at, share, strength, width } of burrs) {
      const key = turn >= 0 ? 2 * turn : -2 * turn - 1;
      if (share < 1 && uniformAt(whetherSeed, key) >= share) continue;
      // A chip keeps off the turn's ends, so that it is never cut there.
      const place = at ?? 1 + (n - 2) * uniformAt(whereSeed, key);
      const off = Math.abs(x - place);
      const distance = Math.min(off, n - off) / (width / 2);
      if (distance < 1) height += strength * (0.5 + 0.5 * Math.cos(Math.PI * distance));
    }
    return height;
  };
}
