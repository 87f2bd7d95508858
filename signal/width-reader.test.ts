import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { createEdgeQueue } from '@/signal/columns';
import type { RigSetup, WidthClass } from '@/signal/model';
import { edgeRising } from '@/signal/pipeline-types';
import { classifyWidths } from '@/signal/statistics/width-code';
import { openPaths } from '@/signal/test-paths';
import { normal, seeded, testChannel, testRig } from '@/signal/test-signals';
import { WidthReader } from '@/signal/width-reader';

const rateHz = 200_000;
const teeth = 48;
const ladder: WidthClass[] = [
  { widthS: 45e-6, means: 'weak' },
  { widthS: 90e-6, means: 'forward' },
  { widthS: 180e-6, means: 'reverse' },
];
const rigOf = (activeLow = false, missing = 0, classes = ladder): RigSetup => {
  const rig = testRig('width-coded', teeth, missing);
  const channel = testChannel('A', 'A');
  return {
    ...rig,
    wheel: { ...rig.wheel, widthClasses: classes },
    channels: [{ ...channel, sensor: { ...channel.sensor, kind: 'switch', activeLow } }],
  };
};

type Pulse = { t: number; widthS: number };

/** A line that is at its other level for the width of each pulse; a little noise on it. */
function line(pulses: readonly Pulse[], activeLow = false): (t: number) => number {
  const noise = normal(seeded(3));
  let k = 0;
  return (t) => {
    while (k + 1 < pulses.length && pulses[k + 1]!.t <= t) k++;
    while (k > 0 && pulses[k]!.t > t) k--;
    const { t: at, widthS } = pulses[k]!;
    const active = t >= at && t < at + widthS;
    return (active !== activeLow ? 3 : 0.4) + 0.01 * noise();
  };
}

const widths = { weak: 45e-6, forward: 90e-6, reverse: 180e-6 };

/** `count` pulses, `periodS` apart from `fromS` on. */
const row = (fromS: number, count: number, periodS: number, means: keyof typeof widths): Pulse[] =>
  Array.from({ length: count }, (_, k) => ({ t: fromS + k * periodS, widthS: widths[means] }));
const rpmOf = (periodS: number): number => 60 / (teeth * periodS);

describe('pulses whose width carries the direction', () => {
  it.each([false, true])('say which way, with the sign in speed and count (active low: %s)', (activeLow) => {
    for (const means of ['forward', 'reverse'] as const) {
      const pulses = row(0.021_23, 300, 2e-3, means);
      const { motion, paths, speeds, directions } = openPaths(rigOf(activeLow), rateHz, 0.63, [
        line(pulses, activeLow),
      ]);
      const sign = means === 'forward' ? 1 : -1;
      expect(motion.direction).toBe(means);
      expect(directions.map(({ value }) => value)).toEqual(['unknown', means]);
      expect(Math.abs(motion.train.rpm - sign * rpmOf(2e-3))).toBeLessThan(0.3);
      for (const { rpm } of speeds.slice(3)) expect(Math.sign(rpm)).toBe(sign);
      // The first pulse tells no direction, since nobody knows how long before it the last one was; it is counted all the same.
      expect(Math.abs(motion.pulses - sign * paths[0]!.log.count)).toBeLessThanOrEqual(1);
      expect(motion.widths!.counts[means === 'forward' ? 1 : 2]).toBeGreaterThan(285);
    }
  });

  it('time their leading edges alone: pulses of any width stand as even as their teeth', () => {
    for (const method of ['tooth', 'turn', 'window'] as const) {
      for (const activeLow of [false, true]) {
        const random = seeded(5);
        const pulses = row(0.01, 300, 2e-3, 'forward').map((pulse) => ({
          ...pulse,
          widthS: random() < 0.5 ? widths.weak : widths.forward,
        }));
        const settings = { speed: { method, windowS: 0.03, stoppedAfterS: 2 } };
        const { speeds } = openPaths(rigOf(activeLow), rateHz, 0.6, [line(pulses, activeLow)], { settings });
        const known = speeds.filter(({ rpm }) => !Number.isNaN(rpm));
        expect(known.length).toBeGreaterThan(250);
        // A flank is known to a sample, 5 us of 2 ms, and far better over more teeth.
        const mostOff = method === 'tooth' ? 0.005 : 0.0005;
        for (const { rpm } of known.slice(60)) expect(Math.abs(rpm / rpmOf(2e-3) - 1)).toBeLessThan(mostOff);
      }
    }
  });

  it('tell a reversal with the first pulse of the other class, and no speed reaches across it', () => {
    const turnS = 0.02 + 199 * 2e-3;
    const back = row(turnS + 0.0137, 150, 2e-3, 'reverse');
    const pulses = [...row(0.02, 200, 2e-3, 'forward'), ...back];
    const { motion, directions, speeds } = openPaths(rigOf(), rateHz, 0.8, [line(pulses)]);
    expect(directions.map(({ value }) => value)).toEqual(['unknown', 'forward', 'reverse']);
    expect(Math.abs(directions[2]!.t - back[0]!.t)).toBeLessThan(2 / rateHz);
    const known = speeds.filter(({ rpm }) => !Number.isNaN(rpm));
    for (const { t, rpm } of known) {
      expect(Math.sign(rpm)).toBe(t <= turnS + 1e-4 ? 1 : -1);
      expect(Math.abs(rpm)).toBeGreaterThan(0.9 * rpmOf(2e-3));
    }
    expect(Math.abs(motion.pulses - 50)).toBeLessThanOrEqual(1);
    expect(motion.train.sync.losses.reversed).toBe(0);
  });

  it('that warn of a weak field are counted, go on counting the way they went, and tell no direction', () => {
    const weakFrom = 0.02 + 200 * 2e-3;
    const pulses = [
      ...row(0.02, 200, 2e-3, 'reverse'),
      ...row(weakFrom, 20, 2e-3, 'weak'),
      ...row(weakFrom + 0.04, 100, 2e-3, 'reverse'),
    ];
    const { motion, directions } = openPaths(rigOf(), rateHz, 0.7, [line(pulses)]);
    expect(directions.map(({ value }) => value)).toEqual(['unknown', 'reverse', 'unknown', 'reverse']);
    expect(Math.abs(motion.pulses + 320)).toBeLessThanOrEqual(1);
    expect(motion.widths).toMatchObject({ weak: 20, unmatched: 0, cutShort: 0 });
  });

  it('between the classes tell no direction', () => {
    const pulses = row(0.02, 100, 2e-3, 'forward').map((pulse, k) => ({
      ...pulse,
      widthS: k < 60 ? 90e-6 : 127e-6,
    }));
    const { motion } = openPaths(rigOf(), rateHz, 0.22, [line(pulses)]);
    expect(motion.direction).toBe('unknown');
    expect(motion.widths!.unmatched).toBe(40);
    expect(motion.state).toBe('running');
  });

  it('that fill more than half of their period may be cut short: no direction', () => {
    const pulses = [...row(0.02, 200, 2e-3, 'reverse'), ...row(0.42, 300, 300e-6, 'reverse')];
    const { motion } = openPaths(rigOf(), rateHz, 0.51, [line(pulses)]);
    expect(motion.direction).toBe('unknown');
    expect(motion.widths!.cutShort).toBeGreaterThan(290);
    expect(Math.abs(Math.abs(motion.train.rpm) / rpmOf(300e-6) - 1)).toBeLessThan(0.05);
  });

  it('tell no direction with fewer than four samples in the narrowest, and say what rate it takes', () => {
    const low = 44_000;
    const pulses = row(0.02, 400, 2e-3, 'forward');
    const { motion, directions } = openPaths(rigOf(), low, 0.85, [line(pulses)]);
    expect(motion.widths!.refusedBecause).toEqual({
      neededHz: expect.closeTo(88_888.9, 1) as number,
      rateHz: low,
    });
    expect(motion.widths!.isBlind).toBe(false);
    expect(directions.map(({ value }) => value)).toEqual(['unknown']);
    expect(Math.abs(motion.train.rpm / rpmOf(2e-3) - 1)).toBeLessThan(0.02);
    expect(motion.pulses).toBe(400);
    expect(openPaths(rigOf(), rateHz, 0.1, [line(pulses)]).motion.widths!.refusedBecause).toBeNull();
  });

  it('shorter than a sample make no speed at all: some are never seen', () => {
    const { motion, speeds } = openPaths(rigOf(), 10_000, 2, [line(row(0.02, 900, 2.07e-3, 'forward'))]);
    expect(motion.widths!.isBlind).toBe(true);
    expect(motion.state).toBe('unknown');
    expect(speeds.every(({ rpm }) => Number.isNaN(rpm))).toBe(true);
    expect(motion.pulses).toBeGreaterThan(100);
  });
});

describe('pulse by pulse', () => {
  it('reads what the statistics of a whole capture read, each against the period before it', () => {
    const between = (min: number, max: number) => fc.double({ min, max, noNaN: true });
    fc.assert(
      fc.property(
        fc.array(fc.tuple(between(20e-6, 220e-6), between(250e-6, 2e-3)), { maxLength: 40 }),
        (pulses) => {
          const reader = new WidthReader(ladder, false, rateHz);
          const queue = createEdgeQueue();
          const edge = (t: number, rising: boolean): void => {
            queue.midS[0] = t;
            queue.flags[0] = rising ? edgeRising : 0;
          };
          let t = 1;
          const told = pulses.map(([widthS, periodS]) => {
            t += periodS;
            edge(t, true);
            reader.hold(queue, 0);
            edge(t + widthS, false);
            return reader.read(queue, 0);
          });
          const found = classifyWidths(
            pulses.map(([widthS]) => widthS),
            pulses.map(([, periodS]) => periodS),
            ladder,
            rateHz,
          );
          if (!found.ok) throw new Error(found.issue.detail);
          expect(told.slice(1)).toEqual([...found.value.direction].slice(1));
        },
      ),
      { seed: 7 },
    );
  });
});

describe('the sign of life at stand-still', () => {
  it('is no tooth: the shaft is found stopped, and the count stays', () => {
    const moving = row(0.02, 200, 2e-3, 'forward');
    const life = Array.from({ length: 8 }, (_, k) => ({ t: 0.6 + 0.5 * k, widthS: 1.44e-3 }));
    const again = row(4.7, 100, 2e-3, 'reverse');
    const rig = rigOf();
    const stands = openPaths(rig, rateHz, 4.5, [line([...moving, ...life])]);
    const before = openPaths(rig, rateHz, 0.55, [line(moving)]).motion.pulses;
    expect(stands.motion).toMatchObject({ state: 'stopped', direction: 'stopped', pulses: before });
    expect(stands.motion.widths!.standStills).toBe(8);
    expect(stands.speeds.at(-1)!.rpm).toBe(0);
    expect(stands.speeds.at(-1)!.t).toBeCloseTo(0.02 + 199 * 2e-3 + 2, 3);
    const { directions } = openPaths(rig, rateHz, 4.85, [line([...moving, ...life, ...again])]);
    // After a stop the first pulse tells: nothing came for long before it.
    expect(directions.slice(-2).map(({ value }) => value)).toEqual(['unknown', 'reverse']);
    expect(directions.at(-1)!.t).toBeCloseTo(again[0]!.t, 4);
  });
});

describe('a width-coded wheel with a gap', () => {
  it('keeps in sync with it, and loses that for turning back', () => {
    const there = row(0.02, 480, 2e-3, 'forward').filter((_, k) => k % teeth < teeth - 2);
    const back = row(1.2, 480, 2e-3, 'reverse').filter((_, k) => k % teeth < teeth - 2);
    const forward = openPaths(rigOf(false, 2), rateHz, 1, [line(there)]).motion;
    expect(forward.train.sync).toMatchObject({ state: 'synced', betweenGaps: teeth });
    expect(forward.train.sync.gapRatio).toBeCloseTo(3, 1);
    const { motion } = openPaths(rigOf(false, 2), rateHz, 2.2, [line([...there, ...back])]);
    expect(motion.train.sync).toMatchObject({ state: 'synced', losses: { reversed: 1 } });
  });
});

describe('any chunking', () => {
  it('gives the same, bit for bit', () => {
    const pulses = [
      ...row(0.02, 90, 2e-3, 'forward'),
      ...row(0.31, 60, 1.3e-3, 'reverse'),
      ...row(0.45, 40, 300e-6, 'reverse'),
      ...[0.8, 1.3, 1.8, 2.3].map((t) => ({ t, widthS: 1.44e-3 })),
      ...row(2.4, 30, 2e-3, 'weak'),
    ];
    const settings = { speed: { method: 'tooth' as const, windowS: 0.1, stoppedAfterS: 0.6 } };
    const run = (chunk: number) => {
      const { motion, speeds, directions } = openPaths(rigOf(), 100_000, 2.5, [line(pulses)], {
        settings,
        chunk,
        lost: { atS: 0.38, samples: 900 },
      });
      return {
        speeds,
        directions,
        pulses: motion.pulses,
        state: motion.state,
        counts: [...motion.widths!.counts],
      };
    };
    const whole = run(1024);
    expect(whole.directions.map(({ value }) => value)).toContain('stopped');
    for (const chunk of [1, 7, 33, 1000]) expect(run(chunk)).toEqual(whole);
  });
});
