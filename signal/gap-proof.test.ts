import { describe, expect, it } from 'vitest';
import { noGapAhead } from '@/signal/gap-proof';
import { createGapSync } from '@/signal/gap-sync';
import { braked, drive, lossesOf, wrongOf } from '@/signal/test-gaps';
import type { Pulse } from '@/signal/test-gaps';

describe('silence', () => {
  it('may hide the gap unless sync says that none is due', () => {
    const { sync } = drive(
      12,
      1,
      [0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 12].map((t) => ({ t, place: t, extra: false })),
    );
    expect(noGapAhead(sync)).toBe(false);
    const synced = Array.from({ length: 30 }, (_, t) => ({ t, place: t, extra: false })).filter(
      ({ place }) => place % 12 < 11,
    );
    expect(noGapAhead(drive(12, 1, synced).sync)).toBe(true);
    expect(
      noGapAhead(
        drive(
          12,
          1,
          synced.filter(({ place }) => place <= 22),
        ).sync,
      ),
    ).toBe(false);
    expect(noGapAhead(createGapSync(12, 0))).toBe(true);
  });

  const brakes = (n: number, missing: number): { pulses: Pulse[]; nearAfter: boolean[] }[] =>
    Array.from({ length: 400 }, (_, seed) => {
      const pulses = braked(n, missing, 2.5 * n + (seed * n) / 400, 8 + (seed % 25), seed);
      return { pulses, nearAfter: drive(n, missing, pulses).nearAfter };
    });

  it.each([
    [36, 1],
    [60, 2],
    [12, 1],
  ])(
    'on a wheel of %i - %i may hide the gap wherever that could be, once the shaft was braked hard',
    (n, missing) => {
      for (const { pulses, nearAfter } of brakes(n, missing)) {
        nearAfter.slice(0, -1).forEach((isNear, k) => {
          if (isNear) expect(pulses[k + 2]!.place - pulses[k + 1]!.place).toBe(1);
        });
        // Steady before and long after: the place is known but for the last tooth.
        const share = nearAfter.slice(-n).filter(Boolean).length / n;
        expect(share).toBeGreaterThan(1 - (missing + 3) / n);
      }
    },
  );

  it.each([
    [36, 1],
    [60, 2],
  ])(
    'of the teeth of %i - %i on a hard brake is seldom taken for the gap, or for missed ones',
    (n, missing) => {
      const runs = Array.from({ length: 400 }, (_, seed) =>
        drive(n, missing, braked(n, missing, 2.5 * n + (seed * n) / 400, 8 + (seed % 60), seed)),
      );
      const kept = runs.filter((run) => lossesOf(run) === 0 && wrongOf(run).length === 0);
      expect(kept.length / runs.length).toBeGreaterThan(0.85);
    },
  );

  it('hides no more than one position on a wheel that lost a tooth, once that is known', () => {
    const pulses = braked(36, 1, 1000, 1, 5).filter(({ place }) => place < 80 || place % 36 !== 12);
    const { nearAfter } = drive(36, 1, pulses);
    // From the gap up to the place of the tooth that is not there.
    for (let turn = 4; turn < 6; turn++) {
      const begin = pulses.findIndex(({ place }) => place === 36 * turn);
      expect(nearAfter.slice(begin - 1, begin + 9)).toEqual(new Array(10).fill(true));
    }
  });
});
