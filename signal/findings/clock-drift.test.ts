import { describe, expect, it } from 'vitest';
import { ClockDriftRule } from '@/signal/findings/clock-drift';
import { seeded } from '@/signal/test-signals';

/** A board and its way to the hub: ten blocks a second, each as late as `lateS` says. */
type Board = { rule: ClockDriftRule; streamS: number; hubS: number };

const board = (): Board => ({ rule: new ClockDriftRule(), streamS: 0, hubS: 5000 });

/** Runs on for so long at a clock that is `ppm` fast; gives the stream times at which the finding was open. */
function run(
  its: Board,
  seconds: number,
  ppm: number,
  lateS: () => number,
): { openFromS: number; everOpen: boolean } {
  let openFromS = NaN;
  for (let k = 0; k < seconds * 10; k++) {
    its.hubS += 0.1;
    its.streamS += 0.1 * (1 + ppm * 1e-6);
    its.rule.note({ kind: 'arrival', streamS: its.streamS, hubS: its.hubS + lateS() }, its.streamS);
    its.rule.tick(its.streamS);
    if (Number.isNaN(openFromS) && latchOf(its).open) openFromS = its.streamS;
  }
  return { openFromS, everOpen: !Number.isNaN(openFromS) };
}

const latchOf = ({ rule }: Board) => rule.latches[0]!;

/** A quick network: some milliseconds, now and then a tenth of a second or more. */
function network(seed: number, slowS = 0.2): () => number {
  const random = seeded(seed);
  return () => 0.002 + 0.004 * random() + (random() < 0.05 ? slowS * random() : 0);
}

describe('clock drift', () => {
  it.each([
    [400, 'warn'],
    [-1000, 'warn'],
    [2900, 'warn'],
    [3200, 'fault'],
    [-20_000, 'fault'],
  ] as const)('of %d ppm is said within a minute, as %s, with what it does to the speed', (ppm, severity) => {
    const its = board();
    const { openFromS } = run(its, 60, ppm, network(1));
    expect(openFromS).toBeGreaterThan(25);
    expect(openFromS).toBeLessThan(60);
    run(its, 120, ppm, network(2));
    const { open } = latchOf(its);
    expect(open).toMatchObject({ code: 'clock-drift', severity, outcome: 'found', channel: null, to: null });
    expect(open!.from).toBeLessThanOrEqual(open!.at);
    const { driftPpm, errorPpm, speedErrorPercent } = open!.evidence as Record<string, number>;
    expect(Math.abs(driftPpm! - ppm)).toBeLessThan(Math.max(4 * errorPpm!, 0.002 * Math.abs(ppm)));
    expect(speedErrorPercent).toBeCloseTo(driftPpm! / 10_000, 9);
  });

  it.each([0, 100, -100, 150])('of %d ppm is none: that is how good crystals are', (ppm) => {
    for (let seed = 10; seed < 20; seed++) {
      expect([seed, run(board(), 400, ppm, network(seed)).everOpen]).toEqual([seed, false]);
    }
  });

  it('opens at 300 ppm and stays down to 200: between them it depends on what was before', () => {
    const fresh = board();
    expect(run(fresh, 600, 250, network(3)).everOpen).toBe(false);
    const its = board();
    expect(run(its, 120, 700, network(4)).everOpen).toBe(true);
    // What the hub remembers of arrivals is five minutes long.
    run(its, 400, 250, network(5));
    expect(latchOf(its).open).not.toBeNull();
    expect(Number(latchOf(its).open!.evidence.driftPpm)).toBeLessThan(300);
    expect(latchOf(its).closed).toEqual([]);
    run(its, 400, 100, network(6));
    expect(latchOf(its).open).toBeNull();
    const [closed, ...others] = latchOf(its).closed;
    expect(others).toEqual([]);
    expect(closed!.to).toBeGreaterThan(520);
    expect(closed!.to).toBeLessThan(920);
    expect(closed!.at).toBeLessThanOrEqual(closed!.to!);
  });

  it('waits where the network is so slow that the drift does not stand out of it', () => {
    const random = seeded(7);
    // Every block is late by up to a second: half a minute of it tells nothing of 400 ppm.
    const slow = () => 0.05 + random();
    const its = board();
    expect(run(its, 45, 400, slow).everOpen).toBe(false);
    expect(run(its, 300, 400, slow).everOpen).toBe(true);
  });

  it('is not seen in a gap whose length is a guess, nor in a minute of late blocks', () => {
    const its = board();
    run(its, 100, 0, network(8));
    its.streamS += 0.3;
    its.rule.gap({ fromS: its.streamS - 0.3, toS: its.streamS, lostSamples: 300, estimated: true });
    expect(run(its, 300, 0, network(9)).everOpen).toBe(false);
    const quick = network(10);
    const late = network(11);
    let block = 0;
    const congested = () => (block++ % 3000 > 1500 && block % 3000 < 2000 ? 1.5 + late() : quick());
    expect(run(its, 300, 0, congested).everOpen).toBe(false);
  });
});
