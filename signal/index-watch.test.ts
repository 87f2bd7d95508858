import { describe, expect, it } from 'vitest';
import { createSpeedColumns } from '@/signal/columns';
import { angleDeg } from '@/signal/falling-bound';
import { IndexWatch } from '@/signal/index-watch';
import { defaultSettings } from '@/signal/model';
import type { RigSetup } from '@/signal/model';
import { Motion } from '@/signal/motion';
import { openPaths } from '@/signal/test-paths';
import { normal, seeded, testChannel, testRig } from '@/signal/test-signals';

const rateHz = 20_000;

function watched(
  rig: RigSetup,
  seconds: number,
  volts: readonly ((t: number) => number)[],
  lostAtS = Infinity,
) {
  const { watch, motion } = openPaths(rig, rateHz, seconds, volts, { lost: { atS: lostAtS, samples: 4000 } });
  return { watch: watch!, motion };
}

const withIndex = (rig: RigSetup): RigSetup => ({
  ...rig,
  channels: [...rig.channels, testChannel('Z', 'Z')],
});

/** Teeth as a raised cosine each; `gone(n)` tells which of all that ever come does not show. */
function teeth(
  n: number,
  missing: number,
  turnsAt: (t: number) => number,
  noise: () => number,
  gone: (tooth: number) => boolean = () => false,
  shift = 0,
): (t: number) => number {
  return (t) => {
    const place = turnsAt(t) * n - shift;
    const tooth = Math.floor(place);
    const there = ((tooth % n) + n) % n < n - missing && !gone(tooth);
    return (there ? 1.65 - Math.cos(2 * Math.PI * place) : 0.65) + noise();
  };
}

/** One mark a turn, `width` turns wide, its rise where the turn begins. */
function mark(turnsAt: (t: number) => number, width: number, noise: () => number): (t: number) => number {
  return (t) => {
    const turns = turnsAt(t) + width / 2;
    const off = (turns - Math.floor(turns) - width) / width;
    return 0.4 + 2 * Math.exp(-8 * off * off) + noise();
  };
}

const still = (): number => 0;
const hiss = (rms: number, seed: number): (() => number) => {
  const noise = normal(seeded(seed));
  return () => rms * noise();
};

describe('an index', () => {
  const turnsAt = (t: number): number => 8 * t + 0.3 * Math.sin(t) + 0.2;

  it.each([
    ['single', 24, 0, 24],
    ['single', 36, 1, 35],
    ['single', 60, 2, 58],
    ['quadrature', 64, 0, 256],
  ] as const)(
    'finds every turn of %s %i - %i exact, whatever stands beside it',
    (sensing, n, missing, expected) => {
      const noise = hiss(0.03, n);
      const lines = [teeth(n, missing, turnsAt, noise)];
      if (sensing === 'quadrature') lines.push(teeth(n, missing, turnsAt, noise, undefined, 0.25));
      const rig = withIndex(testRig(sensing, n, missing));
      const { watch } = watched(rig, 6, [...lines, mark(turnsAt, 0.02, noise)]);
      expect(watch.expected).toBe(expected);
      expect(watch.exactTurns).toBeGreaterThan(40);
      expect(watch).toMatchObject({ lostTurns: 0, extraTurns: 0, lostCounts: 0, extraCounts: 0, bounces: 0 });
      expect(watch.lastTurn).toMatchObject({ verdict: 'exact', counted: expected, excess: 0 });
      expect(watch.meanCounted).toBeCloseTo(expected, 9);
      expect(watch.lastWrongS).toBeNaN();
      expect(Math.abs(watch.lastTurn!.toS - watch.lastTurn!.fromS - 0.125)).toBeLessThan(0.01);
    },
  );

  it('says how many counts a turn lost, and when', () => {
    const lost = new Set([300, 301, 480]);
    const volts = [teeth(24, 0, turnsAt, still, (tooth) => lost.has(tooth)), mark(turnsAt, 0.02, still)];
    const { watch } = watched(withIndex(testRig('single', 24)), 4, volts);
    expect(watch).toMatchObject({ lostTurns: 2, extraTurns: 0, lostCounts: 3 });
    expect(turnsAt(watch.lastWrongS)).toBeCloseTo(21, 1);
  });

  it('counts four a pulse in quadrature: a tooth that one line does not show costs a whole one', () => {
    const lines = [0, 0.25].map((shift, c) =>
      teeth(64, 0, turnsAt, still, (tooth) => c === 0 && tooth === 1000, shift),
    );
    const { watch, motion } = watched(withIndex(testRig('quadrature', 64)), 4, [
      ...lines,
      mark(turnsAt, 0.02, still),
    ]);
    expect(watch).toMatchObject({ lostTurns: 1, extraTurns: 0, lostCounts: 4 });
    expect(motion.tracker!.illegalSteps).toBe(0);
  });

  it('says how many counts are too many, and that they are so turn after turn', () => {
    const volts = [teeth(30, 0, turnsAt, still), mark(turnsAt, 0.02, still)];
    const { watch } = watched(withIndex(testRig('single', 24)), 4, volts);
    expect(watch.exactTurns).toBe(0);
    expect(watch.extraTurns).toBeGreaterThan(20);
    expect(watch).toMatchObject({ meanCounted: 30, sameInRow: watch.turns });
    expect(watch.extraCounts).toBe(6 * watch.extraTurns);
  });

  it('that bounces is one index', () => {
    const bouncing = (t: number): number => {
      const turns = turnsAt(t) - Math.floor(turnsAt(t));
      return (turns > 0.3 && turns < 0.305) || (turns > 0.308 && turns < 0.32) ? 3 : 0.3;
    };
    const { watch } = watched(withIndex(testRig('single', 24)), 4, [teeth(24, 0, turnsAt, still), bouncing]);
    expect(watch.bounces).toBeGreaterThan(25);
    expect(watch.exactTurns).toBeGreaterThan(25);
    expect(watch.lostTurns + watch.extraTurns).toBe(0);
  });

  it('judges no turn with a reversal, a stop or lost samples in it', () => {
    const toAndFro = (t: number): number => 5 - 4.6 * Math.cos(0.9 * t);
    const lines = [0, 0.25].map((shift) => teeth(16, 0, toAndFro, still, undefined, shift));
    const there = watched(withIndex(testRig('quadrature', 16)), 14, [
      ...lines,
      mark(toAndFro, 0.02, still),
    ]).watch;
    expect(there.exactTurns).toBeGreaterThan(15);
    expect(there.lostTurns + there.extraTurns).toBe(0);

    const volts = [teeth(24, 0, turnsAt, still), mark(turnsAt, 0.02, still)];
    const lossy = watched(withIndex(testRig('single', 24)), 5, volts, 2.3).watch;
    expect(lossy.exactTurns).toBeGreaterThan(25);
    expect(lossy.lostTurns + lossy.extraTurns).toBe(0);

    const stops = (t: number): number => 6 * Math.min(t, 2.05) + 6 * Math.max(0, t - 5);
    const stopped = watched(withIndex(testRig('single', 24)), 8, [
      teeth(24, 0, stops, still),
      mark(stops, 0.02, still),
    ]);
    expect(stopped.motion.state).toBe('running');
    expect(stopped.watch.exactTurns).toBeGreaterThan(20);
    expect(stopped.watch.lostTurns + stopped.watch.extraTurns).toBe(0);
  });

  it('with more jitter than a count overlooks none for good, and invents none', () => {
    const fast = (t: number): number => 6 * t;
    const run = (gone: (tooth: number) => boolean) =>
      watched(withIndex(testRig('quadrature', 250)), 10, [
        teeth(250, 0, fast, still, gone),
        teeth(250, 0, fast, still, undefined, 0.25),
        mark(fast, 0.06, hiss(0.12, 9)),
      ]).watch;
    const sound = run(() => false);
    expect(sound.lastTurn!.toleranceCounts).toBeGreaterThan(2);
    expect(sound).toMatchObject({ lostTurns: 0, extraTurns: 0 });
    const lossy = run((tooth) => tooth % 500 === 3 && tooth > 2500);
    expect(lossy.extraTurns).toBe(0);
    expect(lossy.lostCounts).toBeGreaterThan(4 * 22);
    expect(lossy.lostCounts).toBeLessThan(4 * 28);
  });
});

describe('the numbers of the teeth', () => {
  const strong = 7;
  /** Tooth 7 of 24 stands out, on each line. */
  const marked =
    (turnsAt: (t: number) => number, shift = 0) =>
    (t: number) => {
      const place = turnsAt(t) * 24 - shift;
      const tooth = ((Math.floor(place) % 24) + 24) % 24;
      return 0.65 + (tooth === strong ? 1.2 : 1) * (1 - Math.cos(2 * Math.PI * place));
    };
  const faceOf = (motion: Motion) => motion.train.face!.snapshot(null);
  const strongest = (motion: Motion): number => {
    const swings = faceOf(motion).positions.map(({ swingV }) => swingV ?? 0);
    return swings.indexOf(Math.max(...swings));
  };

  it('begin with the first after the index, wherever the count began', () => {
    for (const from of [0.03, 0.4, 0.77]) {
      const turnsAt = (t: number): number => 7 * t + from;
      const rig = testRig('single', 24);
      const plain = openPaths(rig, rateHz, 2, [marked(turnsAt)]).motion;
      expect(faceOf(plain).numbered).toBe(false);
      const { motion } = watched(withIndex(rig), 2, [marked(turnsAt), mark(turnsAt, 0.05, still)]);
      expect(faceOf(motion).numbered).toBe(true);
      expect(strongest(motion)).toBe(strong);
      // Where the shaft stands now, on the same numbers.
      const now = angleDeg(motion, 2);
      expect(Math.abs(((now - 360 * (turnsAt(2) % 1) + 540) % 360) - 180)).toBeLessThan(16);
    }
  });

  it('are the same turning the other way, and after a stop', () => {
    const turnsAt = (t: number): number => (t < 2 ? 7 * t : t < 4.5 ? 14 : 14 - 7 * (t - 4.5)) + 0.4;
    const lines = [0, 0.25].map((shift) => marked(turnsAt, shift));
    const rig = withIndex(testRig('quadrature', 24));
    const there = watched(rig, 2, [...lines, mark(turnsAt, 0.05, still)]).motion;
    expect(strongest(there)).toBe(strong);
    const { motion } = watched(rig, 6.5, [...lines, mark(turnsAt, 0.05, still)]);
    expect(motion.direction).toBe('reverse');
    expect(faceOf(motion).numbered).toBe(true);
    expect(strongest(motion)).toBe(strong);
    const now = angleDeg(motion, 6.5);
    expect(Math.abs(((now - 360 * (turnsAt(6.5) % 1) + 540) % 360) - 180)).toBeLessThan(16);
  });

  it('stay where they are though the index jitters about the flank of a tooth', () => {
    // The index rises with tooth 0, a little before or after it.
    const turnsAt = (t: number): number => 7 * t + 0.4;
    const jitter = normal(seeded(4));
    const offs = Array.from({ length: 40 }, () => 0.08 * jitter());
    const index = (t: number): number => {
      const turn = Math.floor(turnsAt(t));
      const places = (turnsAt(t) - turn) * 24;
      return places > 0.25 + offs[turn]! && places < 3 ? 3 : 0.3;
    };
    const seen = new Set<number>();
    for (const seconds of [2, 2.4, 2.9, 3.5, 4, 4.7])
      seen.add(
        strongest(watched(withIndex(testRig('single', 24)), seconds, [marked(turnsAt), index]).motion),
      );
    expect(seen.size).toBe(1);
  });
});

describe('without an index', () => {
  it('there is no watch', () => {
    const motion = new Motion(testRig('single', 24), defaultSettings, rateHz, 0, createSpeedColumns(), []);
    expect(IndexWatch.of(undefined, undefined, motion, rateHz)).toBeNull();
  });
});
