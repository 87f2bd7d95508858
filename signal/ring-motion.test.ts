import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { createEdgeQueue, createSpeedColumns } from '@/signal/columns';
import { createDirectionTracker, seenStates, stepTo, stepTogether } from '@/signal/direction-tracker';
import type { DirectionTracker } from '@/signal/direction-tracker';
import { speedAtMostRpm } from '@/signal/falling-bound';
import { defaultSettings } from '@/signal/model';
import { Motion } from '@/signal/motion';
import { edgeRising } from '@/signal/pipeline-types';
import type { DirectionChange } from '@/signal/pipeline-types';
import { illegalStep, stepTable } from '@/signal/step-table';
import { openPaths } from '@/signal/test-paths';
import { normal, seeded, testRig } from '@/signal/test-signals';

const rateHz = 10_000;

type Edge = { at: number; role: number; rising: boolean };

/** Edges in order of time through the motion itself; noise is taken as known and of no weight unless given. */
function motionOf(sensing: 'quadrature' | 'three-hall', edges: readonly Edge[], sigmaS = 1e-9) {
  const directions: DirectionChange[] = [];
  const settings = { ...defaultSettings, speed: { ...defaultSettings.speed, stoppedAfterS: 2 } };
  const motion = new Motion(testRig(sensing, 4), settings, rateHz, 0, createSpeedColumns(), directions);
  const queue = createEdgeQueue();
  for (const { at, role, rising } of edges) {
    queue.at[0] = at;
    queue.midS[0] = at / rateHz;
    queue.delayS[0] = 0;
    queue.sigmaS[0] = sigmaS;
    queue.flags[0] = rising ? edgeRising : 0;
    motion.take(queue, 0, role);
  }
  return { motion, directions, tracker: motion.tracker! };
}

/** Edges of lines that are high for `high` of a cycle from their place on, while the shaft goes along `cyclesAt`. */
function edgesOf(
  places: readonly number[],
  high: number,
  cyclesAt: (sample: number) => number,
  samples: number,
): Edge[] {
  const edges: Edge[] = [];
  const isHigh = (place: number, cycles: number): boolean => (((cycles - place) % 1) + 1) % 1 < high;
  const step = 1 / 16;
  for (let at = step; at < samples; at += step) {
    places.forEach((place, role) => {
      const rising = isHigh(place, cyclesAt(at));
      if (rising !== isHigh(place, cyclesAt(at - step))) edges.push({ at, role, rising });
    });
  }
  return edges;
}

const quadrature = [0, 0.25];
const threeHall = [0, 1 / 3, 2 / 3];

describe('the states of a quadrature pair', () => {
  it('count exactly through reversals and dither, and never call a sound pair illegal', () => {
    fc.assert(
      fc.property(
        fc.array(fc.integer({ min: -24, max: 24 }), { minLength: 1, maxLength: 6 }),
        fc.nat(),
        (stops, seed) => {
          // In the middle of states, 200 samples from one to the next; to and fro first, until all levels are known. Each line
          // trembles at its edges: a step and its opposite.
          const ends = [0, 4, 0, ...stops].map((state) => (state + 0.5) / 4);
          const cyclesAt = (sample: number): number => {
            const k = Math.min(ends.length - 2, Math.floor(sample / 200));
            return ends[k]! + (ends[k + 1]! - ends[k]!) * Math.min(1, sample / 200 - k);
          };
          const noise = normal(seeded(seed));
          const edges = edgesOf(quadrature, 0.5, cyclesAt, 200 * (ends.length - 1)).flatMap((edge) => {
            const back = 0.02 + Math.abs(0.02 * noise());
            return [
              edge,
              { ...edge, at: edge.at + back / 2, rising: !edge.rising },
              { ...edge, at: edge.at + back },
            ];
          });
          const before = motionOf(
            'quadrature',
            edges.filter(({ at }) => at < 400),
          ).tracker.netSteps;
          const { tracker, motion } = motionOf('quadrature', edges);
          expect(tracker.netSteps - before).toBe(stops.at(-1));
          expect(motion.pulses).toBe(tracker.netSteps / 4);
          expect(tracker.illegalSteps).toBe(0);
        },
      ),
      { numRuns: 40, seed: 4 },
    );
  });

  it('show a reversal within one cycle, and no other', () => {
    for (let turnAt = 5; turnAt < 6; turnAt += 0.03) {
      const cyclesAt = (sample: number): number => turnAt - Math.abs(turnAt - sample / 100);
      const { directions } = motionOf('quadrature', edgesOf(quadrature, 0.5, cyclesAt, 1000));
      expect(directions.map(({ value }) => value)).toEqual(['unknown', 'forward', 'reverse']);
      const late = directions[2]!.t * rateHz - 100 * turnAt;
      expect(late).toBeGreaterThan(0);
      expect(late).toBeLessThan(100);
    }
  });

  it('are illegal where both lines change between the same two samples: the way round is not known', () => {
    const edges = edgesOf(quadrature, 0.5, (sample) => sample / 40, 402);
    const sound = motionOf('quadrature', edges).tracker;
    expect(sound).toMatchObject({ netSteps: 39, illegalSteps: 0 });
    const both = [...edges, { at: 402.6, role: 0, rising: false }, { at: 402.6, role: 1, rising: true }];
    const { tracker, motion } = motionOf('quadrature', both);
    expect(tracker).toMatchObject({ netSteps: 39, illegalSteps: 1, skippedStates: 1, invalidStates: 0 });
    expect(tracker.lastIllegalS).toBeCloseTo(402.6 / rateHz, 12);
    expect(motion.direction).toBe('forward');
    // A straight line between two samples tells the order of smooth edges well enough.
    const apart = [...edges, { at: 402.4, role: 1, rising: true }, { at: 402.8, role: 0, rising: false }];
    expect(motionOf('quadrature', apart).tracker).toMatchObject({ netSteps: 41, illegalSteps: 0 });
    // Not where the edges are as uncertain as the distance between them.
    expect(motionOf('quadrature', apart, 0.3 / rateHz).tracker).toMatchObject({ illegalSteps: 1 });
    const between = [...edges, { at: 402.9, role: 1, rising: true }, { at: 403.05, role: 0, rising: false }];
    expect(motionOf('quadrature', between, 0.3 / rateHz).tracker).toMatchObject({
      netSteps: 41,
      illegalSteps: 0,
    });
  });

  it('make no speed of a cycle in which the count was lost', () => {
    const edges = edgesOf(quadrature, 0.5, (sample) => sample / 40, 402);
    expect(motionOf('quadrature', edges).motion.state).toBe('running');
    const both = [
      { at: 402.6, role: 0, rising: false },
      { at: 402.6, role: 1, rising: true },
      { at: 430, role: 1, rising: false },
      { at: 440, role: 0, rising: true },
    ];
    const { motion } = motionOf('quadrature', [...edges, ...both]);
    expect(motion.state).toBe('unknown');
    expect(motion.train.rpm).toBeNaN();
  });
});

describe('the states of a three-Hall set', () => {
  it('are six steps a cycle either way, all of them seen and none else', () => {
    for (const way of [1, -1]) {
      const { tracker, motion } = motionOf(
        'three-hall',
        edgesOf(threeHall, 0.5, (s) => (way * s) / 60 + 0.01, 600),
      );
      // The state is known once each line has changed.
      expect(Math.abs(tracker.netSteps - way * 60)).toBeLessThanOrEqual(2);
      expect(seenStates(tracker)).toBe(0b01111110);
      expect(tracker.illegalSteps).toBe(0);
      // Electrical turns; a turn of the shaft is one for each of four pole pairs.
      expect(motion.pulses).toBeCloseTo(tracker.netSteps / 6, 12);
    }
  });

  it('keep their count where all lines are low for a while between two of them', () => {
    const { tracker } = motionOf(
      'three-hall',
      edgesOf(threeHall, 0.3, (s) => s / 60 + 0.01, 6000),
    );
    expect(Math.abs(tracker.netSteps - 600)).toBeLessThanOrEqual(4);
    expect(seenStates(tracker) & 0b10000001).toBe(1);
    expect(tracker.invalidStates).toBeGreaterThan(290);
    expect(tracker.sense).toBe(1);
  });

  it('tell an inverted line and a set that stands 60 degrees apart by the states that are seen', () => {
    const inverted = edgesOf(threeHall, 0.5, (s) => s / 60 + 0.01, 600).map((edge) =>
      edge.role === 1 ? { ...edge, rising: !edge.rising } : edge,
    );
    const seen = seenStates(motionOf('three-hall', inverted).tracker);
    expect(seen & 0b10000001).toBe(0b10000001);
    expect(seen & 0b00100100).toBe(0);
    expect(
      seenStates(
        motionOf(
          'three-hall',
          edgesOf([0, 1 / 6, 2 / 6], 0.5, (s) => s / 60, 600),
        ).tracker,
      ),
    ).toBe(seen);
  });

  it('have a skip apart from a state that cannot be, and the count goes on over it', () => {
    const tracker = createDirectionTracker(stepTable('three-hall')!);
    // All three lines change once: then W falls and U alone is left.
    for (const [index, high] of [
      [0, true],
      [1, false],
      [2, false],
    ] as const)
      stepTo(tracker, index, high);
    expect(tracker.netSteps).toBe(1);
    // V with it, then V alone: the order was not known, the way round was.
    expect(stepTo(tracker, 1, true)).toBe(1);
    expect(stepTogether(tracker, 0, false)).toBe(2);
    expect(tracker).toMatchObject({ netSteps: 3, skippedStates: 1, invalidStates: 0, illegalSteps: 1 });
    // None, which cannot be, then V again, then W with it.
    expect(stepTo(tracker, 1, false)).toBe(0);
    expect(tracker).toMatchObject({ netSteps: 3, skippedStates: 1, invalidStates: 1, illegalSteps: 2 });
    expect(stepTo(tracker, 1, true)).toBe(0);
    expect(stepTo(tracker, 2, true)).toBe(1);
    expect(tracker.netSteps).toBe(4);
  });
});

describe('two lines at once', () => {
  it('on a pair leave the count as it was before both', () => {
    const tracker: DirectionTracker = createDirectionTracker(stepTable('quadrature')!);
    stepTo(tracker, 0, true);
    stepTo(tracker, 1, true);
    stepTo(tracker, 0, false);
    expect(tracker).toMatchObject({ netSteps: 2, sense: 1 });
    stepTo(tracker, 1, false);
    expect(tracker).toMatchObject({ netSteps: 3, sense: 1 });
    stepTo(tracker, 1, true);
    expect(stepTogether(tracker, 0, true)).toBe(illegalStep);
    expect(tracker).toMatchObject({ netSteps: 3, sense: 1, illegalSteps: 1 });
  });
});

describe('widths of states', () => {
  it('are learnt in degrees of the cycle, each direction its own', () => {
    // B 70 degrees behind A, high for 55 % of the cycle: A alone 70, both 128, B alone 70, none 92 degrees.
    const sway = (sample: number): number => sample / 97 + 0.02 * Math.sin(sample / 900);
    const far = sway(6000);
    const cyclesAt = (sample: number): number => (sample < 6000 ? sway(sample) : 2 * far - sway(sample));
    const { motion } = motionOf('quadrature', edgesOf([0, 70 / 360], 0.55, cyclesAt, 12_000));
    const { forwardDeg, reverseDeg, forwardCycles, reverseCycles } = motion.stateDwell!;
    for (const deg of [forwardDeg, reverseDeg]) {
      expect(deg[0b10]! - 70).toBeLessThan(1);
      expect([0b10, 0b11, 0b01, 0b00].map((state) => Math.round(deg[state]!))).toEqual([70, 128, 70, 92]);
      expect(deg.reduce((sum, one) => sum + one, 0)).toBeCloseTo(360, 9);
    }
    expect(forwardCycles).toBeGreaterThan(50);
    expect(reverseCycles).toBeGreaterThan(50);
    expect(Math.abs(motion.ring!.forwardPhase.deg - 70)).toBeLessThan(1);
    // Turning back, B rises where it fell before: 360 - 70 - (0.55 - 0.55) 360 degrees after A.
    expect(Math.abs(motion.ring!.reversePhase.deg + 70)).toBeLessThan(1);
    expect(motion.phase).toBe(motion.ring!.reversePhase);
  });

  it('of a three-Hall set are 60 degrees each, and those that cannot be have none', () => {
    const { motion } = motionOf(
      'three-hall',
      edgesOf(threeHall, 0.5, (s) => s / 96 + 0.01, 4000),
    );
    const { forwardDeg, reverseDeg } = motion.stateDwell!;
    for (const state of [1, 3, 2, 6, 4, 5]) expect(Math.abs(forwardDeg[state]! - 60)).toBeLessThan(0.5);
    expect(forwardDeg[0]).toBeNaN();
    expect(forwardDeg[7]).toBeNaN();
    expect(reverseDeg[1]).toBeNaN();
  });

  it('are not learnt from a cycle with dither in it', () => {
    const cyclesAt = (s: number): number => s / 200 + 0.2 * Math.sin(s / 20);
    const { motion } = motionOf('quadrature', edgesOf(quadrature, 0.5, cyclesAt, 4000));
    expect(motion.tracker!.netSteps).toBeGreaterThan(70);
    expect(motion.stateDwell!.forwardCycles).toBeLessThan(4);
  });
});

describe('a quadrature pair on a wheel with a gap', () => {
  const gapWheel = (turnsAt: (t: number) => number, shift: number) => (t: number) => {
    const place = turnsAt(t) * 36 - shift;
    return ((Math.floor(place) % 36) + 36) % 36 < 35 ? 1.65 - Math.cos(2 * Math.PI * place) : 0.65;
  };

  it('counts its positions and reads its speed across the gap, either way round', () => {
    for (const way of [1, -1]) {
      const turnsAt = (t: number): number => way * 10 * t + 0.4;
      const settings = { speed: { method: 'tooth' as const, windowS: 0.1, stoppedAfterS: 2 } };
      const lines = [0, 0.25].map((shift) => gapWheel(turnsAt, shift));
      const { motion, speeds } = openPaths(testRig('quadrature', 36, 1), 20_000, 3, lines, { settings });
      expect(motion.train.sync.state).toBe('synced');
      expect(Math.abs(motion.positions / 36 - way * 30)).toBeLessThan(0.15);
      for (const { rpm } of speeds.slice(80)) expect(Math.abs(rpm / (way * 600) - 1)).toBeLessThan(0.01);
      expect(Math.abs(motion.phase.deg - way * 90)).toBeLessThan(2);
    }
  });

  it('may be silent for longer where the gap is due', () => {
    const turnsAt = (t: number): number => 10 * t + 0.4;
    const lines = [0, 0.25].map((shift) => gapWheel(turnsAt, shift));
    // 1.44 pitches of silence, after the last tooth before the gap and after another.
    const atMost = (lastTooth: number): number => {
      const seconds = (28.6 + (lastTooth + 0.4) / 36) / 10;
      const { motion } = openPaths(testRig('quadrature', 36, 1), 20_000, seconds, lines);
      expect(motion.train.sync).toMatchObject({ state: 'synced', position: lastTooth });
      return speedAtMostRpm(motion, motion.lastEdgeS + 0.004, 0) / 600;
    };
    expect(atMost(34)).toBeGreaterThan(0.85);
    expect(atMost(20)).toBeLessThan(0.25);
  });

  it('is in sync with it anew after turning back', () => {
    const turnsAt = (t: number): number => 0.4 + 10 * (t < 1.5 ? t : 3 - t);
    const lines = [0, 0.25].map((shift) => gapWheel(turnsAt, shift));
    const { motion } = openPaths(testRig('quadrature', 36, 1), 20_000, 3, lines);
    expect(motion.train.sync).toMatchObject({ state: 'synced', losses: { reversed: 1 } });
    expect(Math.abs(motion.positions / 36)).toBeLessThan(0.2);
  });
});
