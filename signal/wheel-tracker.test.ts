import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { normal, seeded } from '@/signal/test-signals';
import { ExtraPulses } from '@/signal/wheel-extras';
import type { WheelSeat } from '@/signal/wheel-count';
import { WheelTracker } from '@/signal/wheel-tracker';

type Seen = { t: number; position: number; spans: number };

/** A tracker that writes down what it says. */
function tracked(positions: number, missing: number) {
  const seen: Seen[] = [];
  let lost = 0;
  const seat: WheelSeat = {
    t: NaN,
    toothSwingV: NaN,
    start: () => undefined,
    place: (position, spans) => seen.push({ t: seat.t, position, spans }),
    lose: () => lost++,
  };
  const extras = new ExtraPulses(positions);
  const tracker = new WheelTracker(positions, missing, seat, extras);
  return {
    seen,
    extras,
    tracker,
    lost: () => lost,
    take(instants: readonly number[]) {
      for (const t of instants) {
        tracker.t = t;
        tracker.swingV = 1;
        tracker.take();
      }
    },
  };
}

/** Instants at which `turnsAt` passes the given places (in positions) of each of so many turns. */
function passes(
  positions: number,
  turns: number,
  places: readonly number[],
  timeAt: (turns: number) => number,
): number[] {
  const instants: number[] = [];
  for (let turn = 0; turn < turns; turn++)
    for (const place of places) instants.push(timeAt(turn + place / positions));
  return instants;
}

const all = (n: number) => Array.from({ length: n }, (_, k) => k);
const steady = (turns: number) => turns / 10;

describe('the tracker of the wheel', () => {
  it('numbers the teeth of a plain wheel from the first one on', () => {
    const run = tracked(24, 0);
    run.take(passes(24, 4, all(24), steady));
    expect(run.seen.map(({ position }) => position)).toEqual(
      all(96)
        .map((k) => k % 24)
        .slice(0, run.seen.length),
    );
    expect(run.seen.length).toBe(96);
    expect(run.extras.total).toBe(0);
  });

  it('keeps the numbers where a tooth is missing, two in a row, or every second one', () => {
    for (const gone of [[7], [7, 8], [6, 8], [5, 7, 9]]) {
      const run = tracked(24, 0);
      run.take(
        passes(
          24,
          6,
          all(24).filter((k) => !gone.includes(k)),
          steady,
        ),
      );
      for (const { t, position } of run.seen) expect(position).toBe(Math.round(t * 10 * 24) % 24);
      expect(run.seen.length).toBeGreaterThan(6 * (24 - gone.length) - 4);
      expect(run.lost()).toBe(0);
      expect(run.extras.total).toBe(0);
    }
  });

  it('takes a pulse between teeth for what it is, wherever in the pitch it comes, and keeps the numbers', () => {
    for (const share of [0.1, 0.3, 0.5, 0.7, 0.8]) {
      const run = tracked(24, 0);
      run.take(
        passes(
          24,
          5,
          [...all(24), 9 + share].sort((a, b) => a - b),
          steady,
        ),
      );
      for (const { t, position } of run.seen) expect(position).toBe(Math.round(t * 10 * 24) % 24);
      expect(run.extras.total).toBe(5);
      const [place] = run.extras.placesAt(run.tracker.count, 3);
      expect(place!.place).toBeCloseTo(9 + share, 2);
      expect(place!.turns).toBe(5);
    }
  });

  it('tells an extra pulse beside a tooth that is missing', () => {
    const run = tracked(24, 0);
    const places = [...all(24).filter((k) => k !== 12), 9.5].sort((a, b) => a - b);
    run.take(passes(24, 5, places, steady));
    for (const { t, position } of run.seen) expect(position).toBe(Math.round(t * 10 * 24) % 24);
    expect(run.extras.total).toBe(5);
  });

  it('keeps the numbers of teeth that stand up to a fifth of a pitch off, all round', () => {
    const run = tracked(8, 0);
    run.take(passes(8, 10, [0, 1.2, 2, 2.85, 4, 5.2, 5.9, 7], steady));
    expect(run.seen.map(({ position }) => position)).toEqual(all(run.seen.length).map((k) => k % 8));
    expect(run.extras.total).toBe(0);
    expect(run.lost()).toBe(0);
  });

  it.each([
    [36, 1],
    [60, 2],
    [12, 4],
    [4, 1],
    [3, 1],
  ])('finds the gap of a wheel of %d with %d missing, begun anywhere', (positions, missing) => {
    for (const from of [0, 1, Math.floor(positions / 2), positions - missing - 1]) {
      const run = tracked(positions, missing);
      run.take(
        passes(positions, 6, all(positions - missing), steady).filter((t) => t * 10 * positions >= from),
      );
      expect(run.seen.length).toBeGreaterThan(2 * (positions - missing));
      for (const { t, position } of run.seen) {
        expect(position).toBe(Math.round(t * 10 * positions) % positions);
      }
    }
  });

  it('keeps the numbers where a tooth beside the gap goes missing, or a burr comes, also within the gap', () => {
    const sound = all(58);
    const cases = [
      sound.filter((k) => k !== 0),
      sound.filter((k) => k !== 57),
      sound.filter((k) => k !== 0 && k !== 57),
      [...sound, 20.5].sort((a, b) => a - b),
      [...sound, 58],
      [...sound, 58.5],
    ];
    for (const places of cases) {
      const run = tracked(60, 2);
      run.take([
        ...passes(60, 4, sound, steady),
        ...passes(60, 8, places, (turns) => 0.4 + steady(turns)),
        ...passes(60, 3, sound, (turns) => 1.2 + steady(turns)),
      ]);
      expect(run.lost()).toBe(0);
      for (const { t, position } of run.seen) expect(position).toBe(Math.round(t * 10 * 60) % 60);
      expect(run.seen.at(-1)!.position).toBeGreaterThan(55);
      expect(run.extras.total).toBe(places.length > 58 ? 8 : 0);
    }
  });

  it('finds the gap again where a tooth beside it has been missing from the start', () => {
    const run = tracked(60, 2);
    run.take(
      passes(
        60,
        6,
        all(58).filter((k) => k !== 57),
        steady,
      ),
    );
    expect(run.seen.length).toBeGreaterThan(100);
    for (const { t, position } of run.seen) expect(position).toBe(Math.round(t * 10 * 60) % 60);
  });

  it('follows ramps over missing teeth and gaps', () => {
    // From rest, evenly faster for three turns, and on at the speed reached then.
    const ramp = (turns: number) =>
      0.6 * (turns < 3 ? Math.sqrt(turns) : Math.sqrt(3) + (turns - 3) / (2 * Math.sqrt(3)));
    const inverse = (t: number) =>
      t < ramp(3) ? (t / 0.6) ** 2 : 3 + 2 * Math.sqrt(3) * (t / 0.6 - Math.sqrt(3));
    for (const [missing, gone] of [
      [1, -1],
      [2, -1],
      [0, 20],
    ] as const) {
      const run = tracked(36, missing);
      run.take(
        passes(
          36,
          10,
          all(36 - missing).filter((k) => k !== gone),
          ramp,
        ),
      );
      // The first teeth from rest may be too uneven to count on from.
      const seen = run.seen.filter((tooth) => tooth.t > ramp(0.5));
      const { t, position } = seen[0]!;
      const from = missing > 0 ? 0 : Math.round(inverse(t) * 36) - position;
      expect(seen.length).toBeGreaterThan(200);
      for (const tooth of seen) expect(tooth.position).toBe((Math.round(inverse(tooth.t) * 36) - from) % 36);
    }
  });

  it('loses the count, rather than slip, where the shaft pauses or jumps to another speed', () => {
    const run = tracked(24, 0);
    run.take(passes(24, 3, all(24), steady));
    run.take(passes(24, 3, all(24), (turns) => 0.3 + 0.031 + steady(turns)));
    run.take(passes(24, 3, all(24), (turns) => 0.7 + steady(turns) / 2.5));
    expect(run.lost()).toBe(2);
    expect(run.extras.total).toBe(0);
  });

  it('says nothing of extra pulses or missing teeth on starts of every kind', () => {
    for (let phase = 0; phase < 1; phase += 0.05) {
      for (const jerk of [0, 1]) {
        const timeAt = (turns: number) => (jerk ? Math.cbrt(turns) : Math.sqrt(turns));
        const run = tracked(24, 0);
        run.take(passes(24, 8, all(24), (turns) => timeAt(turns + phase / 24)));
        expect(run.extras.total).toBe(0);
        expect(run.tracker.gaps.missedTeeth).toBe(0);
      }
    }
  });

  it('says nothing of them on noisy and uneven wheels either', () => {
    const random = normal(seeded(5));
    for (const rms of [0.01, 0.03]) {
      const places = all(60).map((k) => k + rms * random());
      const run = tracked(60, 0);
      run.take(passes(60, 200, places, (turns) => turns / 10 + (0.02 / 600) * random()));
      expect(run.lost()).toBe(0);
      expect(run.extras.total).toBe(0);
      expect(run.tracker.gaps.missedTeeth).toBe(0);
    }
  });

  it('keeps its books on pulses of any kind: places follow from each other by the positions passed', () => {
    const wheelOf = fc.integer({ min: 1, max: 40 }).chain((positions) =>
      fc.record({
        positions: fc.constant(positions),
        missing: fc.integer({ min: 0, max: Math.max(0, positions - 2) }),
        intervals: fc.array(
          fc.oneof(fc.constantFrom(1, 1, 1, 2, 3), fc.double({ min: 1e-6, max: 9, noNaN: true })),
          {
            maxLength: 300,
          },
        ),
      }),
    );
    fc.assert(
      fc.property(wheelOf, ({ positions, missing, intervals }) => {
        let t = 0;
        let before = -1;
        const seat: WheelSeat = {
          t: NaN,
          toothSwingV: NaN,
          start: () => (before = -1),
          lose: () => (before = -1),
          place: (position, spans) => {
            expect(Number.isInteger(position) && position >= 0 && position < positions - missing).toBe(true);
            expect(Number.isInteger(spans) && spans >= 1).toBe(true);
            expect(seat.t).toBeLessThanOrEqual(t);
            if (before >= 0) expect(position).toBe((before + spans) % positions);
            before = position;
          },
        };
        const tracker = new WheelTracker(positions, missing, seat, new ExtraPulses(positions));
        for (const interval of intervals) {
          tracker.t = t += interval;
          tracker.take();
        }
        expect(tracker.waiting).toBeLessThanOrEqual(12);
        expect(tracker.position).toBeLessThan(positions);
      }),
      { numRuns: 300 },
    );
  });
});
