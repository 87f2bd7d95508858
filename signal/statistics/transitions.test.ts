import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { pulseStatistics, spreadOf } from '@/signal/statistics/pulse-statistics';
import { farthest, issueOf, valueOf } from '@/signal/statistics/test-values';
import { findTransitions } from '@/signal/statistics/transitions';

const levels = { lowV: 0, highV: 10 };
const find = (volts: number[]) => valueOf(findTransitions(volts, 100, 1, levels));

describe('transitions', () => {
  it('reads a rise and a fall by hand', () => {
    const { transitions, runts } = find([0, 0, 5, 10, 10, 10, 6, 2, 0]);
    expect(runts).toBe(0);
    expect(transitions.map(({ rising, t50S }) => [rising, t50S])).toEqual([
      [true, 102],
      [false, 106.25],
    ]);
    expect(transitions[0]!.t10S).toBeCloseTo(101.2, 12);
    expect(transitions[0]!.t90S).toBeCloseTo(102.8, 12);
    expect(transitions[1]!.t10S).toBeCloseTo(105.25, 12);
    expect(transitions[1]!.t90S).toBeCloseTo(107.5, 12);
    for (const { overshootPct, undershootPct, extraMidCrossings } of transitions)
      expect([overshootPct, undershootPct, extraMidCrossings]).toEqual([0, 0, 0]);
  });

  it('takes the first middle crossing of a flank that bounces, and counts the others', () => {
    const { transitions } = find([0, 6, 4, 6, 3, 8, 10, 10]);
    expect(transitions).toHaveLength(1);
    expect(transitions[0]!.t50S).toBeCloseTo(100 + 5 / 6, 12);
    expect(transitions[0]!.extraMidCrossings).toBe(4);
  });

  it('takes the last tenth before the middle, not a later one of the same bounce', () => {
    const { transitions } = find([0, 2, 0.5, 6, 0.5, 7, 10, 10]);
    expect(transitions).toHaveLength(1);
    expect(transitions[0]!.t10S).toBeCloseTo(102 + 0.5 / 5.5, 12);
    expect(transitions[0]!.t90S).toBeCloseTo(105 + 2 / 3, 12);
  });

  it('counts runts, and no noise within the states', () => {
    const { transitions, runts } = find([0, 0.1, 0, 7, 0, 0.5, 0, 10, 4, 10, 9.95, 10]);
    expect(transitions.map(({ rising }) => rising)).toEqual([true]);
    expect(runts).toBe(2);
  });

  it('finds over- and undershoot on both flanks, not past the next transition', () => {
    const { transitions } = find([0, 0, 5, 12, 9.9, 9, 10, 10, 10, 5, -1, 0.5, 0, 0, 0, 5, 30]);
    const found = transitions.flatMap(({ overshootPct, undershootPct }) => [overshootPct, undershootPct]);
    expect(farthest(found, [20, 10, 10, 5, 200, 0])).toBeLessThan(1e-9);
  });

  it('mirrors: a signal upside down has the same transitions with the other polarity', () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: -2, max: 12, noNaN: true }), { maxLength: 60 }), (volts) => {
        const up = find(volts);
        const down = find(volts.map((v) => 10 - v));
        expect(down.runts).toBe(up.runts);
        expect(down.transitions.map(({ rising }) => !rising)).toEqual(
          up.transitions.map(({ rising }) => rising),
        );
        down.transitions.forEach((one, k) => {
          const other = up.transitions[k]!;
          expect(one.t50S).toBeCloseTo(other.t50S, 9);
          expect(one.durationS).toBeCloseTo(other.durationS, 9);
          expect(one.overshootPct).toBeCloseTo(other.overshootPct, 9);
        });
      }),
    );
  });

  it('keeps the instants in order, and transitions alternate', () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: -2, max: 12, noNaN: true }), { maxLength: 80 }), (volts) => {
        let last = -Infinity;
        find(volts).transitions.forEach(({ rising, t10S, t50S, t90S }, k, all) => {
          expect(t10S).toBeGreaterThanOrEqual(last);
          expect(t50S).toBeGreaterThanOrEqual(t10S);
          expect(t90S).toBeGreaterThanOrEqual(t50S);
          if (k > 0) expect(rising).toBe(!all[k - 1]!.rising);
          last = t90S;
        });
      }),
    );
  });

  it('refuses levels that are no two states, and what is not finite', () => {
    expect(issueOf(findTransitions([1, 2], 0, 1, { lowV: 2, highV: 2 }))).toBe('no-two-states');
    expect(issueOf(findTransitions([1, 2], 0, 1, { lowV: 3, highV: 2 }))).toBe('no-two-states');
    expect(issueOf(findTransitions([1, Infinity], 0, 1, levels))).toBe('not-finite');
    expect(issueOf(findTransitions([1, 2], 0, 0, levels))).toBe('bad-setting');
    expect(issueOf(findTransitions([1, 2], 0, 1, levels, 0.2))).toBe('bad-setting');
    expect(find([])).toEqual({ transitions: [], runts: 0 });
    expect(find([5, 5, 5])).toEqual({ transitions: [], runts: 0 });
  });
});

describe('pulses', () => {
  it('drops a leading fall and a started period', () => {
    const pulses = valueOf(pulseStatistics([0, 1, 3, 5, 8, 9], [false, true, false, true, false, true]));
    expect(pulses.count).toBe(2);
    expect([...pulses.startS]).toEqual([1, 5]);
    expect([...pulses.durationS]).toEqual([2, 3]);
    expect([...pulses.periodS]).toEqual([4, 4]);
    expect([...pulses.dutyFactor]).toEqual([0.5, 0.75]);
    expect(pulses.separation).toEqual({ mean: 1.5, least: 1, most: 2, rms: 0.5 });
    expect(pulses.overallDuty).toBe(0.625);
  });

  it('refuses lost edges, too few of them and instants that go back', () => {
    expect(issueOf(pulseStatistics([0, 1, 2], [1, 1, 0]))).toBe('bad-setting');
    expect(issueOf(pulseStatistics([0, 1], [1, 0]))).toBe('too-few');
    expect(issueOf(pulseStatistics([0, 1, 2], [0, 1, 0]))).toBe('too-few');
    expect(issueOf(pulseStatistics([0, 2, 1], [1, 0, 1]))).toBe('not-ascending');
    expect(spreadOf([3])).toEqual({ mean: 3, least: 3, most: 3, rms: 0 });
  });
});
