import { describe, expect, it } from 'vitest';
import { loseSync, resetSync } from '@/signal/gap-sync';
import type { SyncLoss, SyncState } from '@/signal/gap-sync';
import { drive, lossesOf, wrongOf } from '@/signal/test-gaps';
import type { Driven, Pulse } from '@/signal/test-gaps';
import { normal, seeded } from '@/signal/test-signals';

type Fault =
  | { kind: 'none' }
  /** The tooth at this place does not show. */
  | { kind: 'weak'; place: number }
  /** A pulse so many positions after this place. */
  | { kind: 'extra'; place: number; after: number };

/**
 * Teeth of eight turns; ln of the pitch's time sways, by `steepest` from one position to the next where it is steepest,
 * and each tooth is off its place by 2 % of the pitch, rms.
 */
function teeth(
  n: number,
  missing: number,
  start: number,
  steepest: number,
  fault: Fault,
  seed: number,
): Pulse[] {
  const noise = normal(seeded(seed));
  const pulses: Pulse[] = [];
  let t = 0;
  let ln = 0;
  for (let place = start; place < start + 8 * n; place++) {
    ln += steepest * Math.cos((2 * Math.PI * place) / (0.7 * n));
    const pitchS = Math.exp(ln);
    const shows = place % n < n - missing && !(fault.kind === 'weak' && fault.place === place);
    if (shows) pulses.push({ t: t + 0.02 * pitchS * noise(), place, extra: false });
    if (fault.kind === 'extra' && fault.place === place) {
      pulses.push({ t: t + fault.after * pitchS, place, extra: true });
    }
    t += pitchS;
  }
  return pulses.sort((a, b) => a.t - b.t);
}

const wheels: [number, number][] = [
  [36, 1],
  [60, 2],
  [24, 1],
  [12, 1],
  [4, 1],
];

describe.each(wheels)('a wheel of %i - %i', (n, missing) => {
  const many = (count: number, run: (random: () => number, seed: number) => Driven): Driven[] => {
    const random = seeded(n);
    return Array.from({ length: count }, (_, seed) => run(random, seed));
  };

  it('is in sync within two turns and stays so, each tooth at its position, on a shaft that changes its speed', () => {
    const runs = many(300, (random, seed) => {
      // 7 % from one position to the next: alpha d / w^2 of 0.07.
      const steepest = 0.14 * (random() - 0.5);
      return drive(n, missing, teeth(n, missing, Math.floor(random() * n), steepest, { kind: 'none' }, seed));
    });
    for (const run of runs) {
      expect(wrongOf(run)).toEqual([]);
      expect(lossesOf(run)).toBe(0);
      expect(run.sync.lostBecause).toBeNull();
      const first = run.steps.find(({ state }) => state === 'synced')!;
      expect(first.pulse.place - run.steps[0]!.pulse.place).toBeLessThanOrEqual(2 * n);
      expect(run.sync.gapRatio / (missing + 1)).toBeGreaterThan(0.9);
      expect(run.sync.gapRatio / (missing + 1)).toBeLessThan(1.1);
      expect(run.sync.betweenGaps).toBe(n);
    }
  });

  it('counts its positions as the shaft passed them, once in sync', () => {
    const pulses = teeth(n, missing, 1, 0.02, { kind: 'none' }, 5);
    const { positions } = drive(n, missing, pulses);
    const passed = pulses.at(-1)!.place - pulses[0]!.place;
    // The gap before the first one that was proven is not counted, nor one that still waits to be judged.
    expect(passed - positions).toBeGreaterThanOrEqual(0);
    expect(passed - positions).toBeLessThanOrEqual(2 * missing);
  });

  it('keeps its sync where one tooth does not show, before, after and away from the gap', () => {
    const last = n - missing - 1;
    for (let position = 0; position <= last; position++) {
      const run = drive(
        n,
        missing,
        teeth(n, missing, 3, 0.02, { kind: 'weak', place: 4 * n + position }, position),
      );
      expect({ position, losses: lossesOf(run), wrong: wrongOf(run) }).toEqual({
        position,
        losses: 0,
        wrong: [],
      });
      expect(run.sync).toMatchObject({ state: 'synced', betweenGaps: n });
    }
  });

  it('leaves out a pulse between teeth, mostly, and else says why it lost its sync and finds it again', () => {
    const runs = many(400, (random, seed) => {
      const place = 4 * n + Math.floor(random() * (n - missing - 1));
      const fault: Fault = { kind: 'extra', place, after: 0.03 + 0.94 * random() };
      return drive(n, missing, teeth(n, missing, 3, 0.05 * (random() - 0.5), fault, seed));
    });
    expect(runs.filter((run) => lossesOf(run) > 0).length / runs.length).toBeLessThan(0.03);
    expect(runs.filter((run) => wrongOf(run).length > 0).length / runs.length).toBeLessThan(0.01);
    for (const { sync } of runs) expect(sync.state).toBe('synced');
    expect(runs.filter(({ sync }) => sync.extraPulses > 0).length / runs.length).toBeGreaterThan(0.97);
  });

  it('takes a pulse inside its gap for what it is, or says why it lost its sync, and is in sync again after two turns', () => {
    const runs = many(400, (random, seed) => {
      const after = (0.03 + 0.94 * random()) * (missing + 1);
      const fault: Fault = { kind: 'extra', place: 5 * n - missing - 1, after };
      return drive(n, missing, teeth(n, missing, 3, 0.05 * (random() - 0.5), fault, seed));
    });
    // Where the missing tooth would stand a pulse cannot be told from a tooth.
    expect(runs.filter((run) => lossesOf(run) > 0).length / runs.length).toBeLessThan(0.45);
    for (const run of runs) {
      expect(run.sync.state).toBe('synced');
      for (const { pulse } of wrongOf(run)) expect(pulse.place).toBeLessThan(7 * n);
    }
  });
});

describe('a sync that is lost', () => {
  const steady = (places: readonly number[]): Pulse[] =>
    places.map((place) => ({ t: place, place: Math.floor(place), extra: false }));
  const turns = (n: number, missing: number, count: number, from = 0): number[] =>
    Array.from({ length: count * n }, (_, k) => from + k).filter((place) => place % n < n - missing);
  const because = (pulses: Pulse[]): { why: SyncLoss[]; state: SyncState } => {
    const { sync } = drive(12, 1, pulses);
    return {
      why: (Object.keys(sync.losses) as SyncLoss[]).filter((key) => sync.losses[key] > 0),
      state: sync.state,
    };
  };

  it('by a gap that is filled', () => {
    const filled = [...turns(12, 1, 4), 47, ...turns(12, 1, 4, 48)];
    expect(because(steady(filled))).toEqual({ why: ['late-gap'], state: 'synced' });
  });

  it('by one tooth too many', () => {
    const later = turns(12, 1, 4, 48).map((place) => place + 1);
    expect(because(steady([...turns(12, 1, 4), 47, ...later]))).toEqual({
      why: ['extra-tooth'],
      state: 'synced',
    });
  });

  it('by a gap before its time', () => {
    const earlier = turns(12, 1, 4, 48).map((place) => place - 1);
    expect(because(steady([...turns(12, 1, 4).slice(0, -1), ...earlier]))).toEqual({
      why: ['early-gap'],
      state: 'synced',
    });
    // Far before its time it may at first be a tooth that did not show.
    const far = turns(12, 1, 4, 48).map((place) => place - 5);
    expect(because(steady([...turns(12, 1, 4).slice(0, -5), ...far]))).toEqual({
      why: ['early-gap'],
      state: 'synced',
    });
  });

  it('by a pause', () => {
    const paused = steady(turns(12, 1, 8)).map((pulse) => ({
      ...pulse,
      t: pulse.t + (pulse.place > 41 ? 30 : 0),
    }));
    expect(because(paused)).toEqual({ why: ['timeout'], state: 'synced' });
  });

  it('by bounce, counted once for each pulse', () => {
    const bounced = steady([...turns(12, 1, 4), 43.02, 43.05].sort((a, b) => a - b));
    const { sync } = drive(12, 1, bounced);
    expect(sync).toMatchObject({ state: 'synced', extraPulses: 2, lostBecause: null });
  });

  it('by what happened to the shaft or the stream, each under its name', () => {
    const { sync } = drive(12, 1, steady(turns(12, 1, 3)));
    expect(sync.state).toBe('synced');
    loseSync(sync, 'reversed');
    expect(sync).toMatchObject({ state: 'unsynced', lostBecause: 'reversed', losses: { reversed: 1 } });
    resetSync(sync, 'lost-samples');
    expect(sync).toMatchObject({ lostBecause: 'reversed', losses: { reversed: 1, 'lost-samples': 0 } });
    const again = drive(12, 1, steady(turns(12, 1, 3))).sync;
    resetSync(again, 'lost-samples');
    expect(again).toMatchObject({ lostBecause: 'lost-samples', losses: { 'lost-samples': 1 } });
  });
});

describe('a wheel set up wrongly', () => {
  const steady = (n: number, missing: number, count: number): Pulse[] =>
    Array.from({ length: count * n }, (_, place) => ({ t: place, place, extra: false })).filter(
      ({ place }) => place % n < n - missing,
    );

  it('is never in sync, and shows the gap that is there', () => {
    const two = drive(60, 2, steady(36, 1, 8)).sync;
    expect(two).toMatchObject({ state: 'unsynced', betweenGaps: 36 });
    expect(two.sameBetween).toBeGreaterThan(4);
    expect(two.gapRatio).toBeCloseTo(2, 9);
    const one = drive(36, 1, steady(60, 2, 8)).sync;
    expect(one).toMatchObject({ betweenGaps: 60 });
    expect(one.state).not.toBe('synced');
    expect(one.gapRatio).toBeCloseTo(3, 9);
    const fewer = drive(60, 1, steady(36, 1, 8)).sync;
    expect(fewer).toMatchObject({ betweenGaps: 36 });
    expect(fewer.state).not.toBe('synced');
  });

  it('with two gaps of the same width a turn is not in sync: which one is meant cannot be told', () => {
    const pulses = steady(36, 1, 8).filter(({ place }) => place % 36 !== 20);
    expect(drive(36, 1, pulses).sync.state).not.toBe('synced');
  });
});
