import { describe, expect, it } from 'vitest';
import {
  evidenceText,
  foldAlike,
  foldFindings,
  healthOf,
  shortNumber,
  worstFirst,
} from '@/client/components/finding-words';
import type { Finding } from '@/signal/model';

const base: Finding = {
  code: 'lost-samples',
  channel: null,
  from: 1,
  to: null,
  severity: 'warn',
  outcome: 'found',
  at: 1,
  evidence: {},
  message: 'm',
  remedy: 'r',
  causedBy: null,
};
const make = (change: Partial<Finding>): Finding => ({ ...base, ...change });

describe('evidenceText', () => {
  it('takes the unit from the name', () => {
    expect(
      evidenceText({ peakV: 1.7, turnsInARow: 312, lostSamples: 48, lagDeg: 88.71, source: 'seq' }),
    ).toBe('peak 1.7 V, turns in a row 312, lost samples 48, lag 88.7°, source seq');
  });
  it('writes short times in the unit that suits them, and no more figures than help', () => {
    expect(evidenceText({ toothS: 0.009396, holdoffS: 0.0000207, quietS: 90.02, toothHz: 1498.61 })).toBe(
      'tooth 9.4 ms, holdoff 20.7 µs, quiet 90 s, tooth 1499 Hz',
    );
  });
  it('puts what a share is of behind its unit', () => {
    expect(evidenceText({ jumpPercentOfTooth: 50, ofHalfSwingPercent: 28.53, neededRadPerS2: 812.4 })).toBe(
      'jump 50 % of tooth, of half swing 28.5 %, needed 812 rad/s²',
    );
  });
  it('keeps a name that is only a unit', () => {
    expect(evidenceText({ V: 2 })).toBe('v 2');
  });
});

describe('shortNumber', () => {
  it.each([
    [0.00012346, '0.0001235'],
    [1498.61, '1499'],
    [-0.22, '\u22120.22'],
    [-0.0, '0'],
    [3, '3'],
    [12.5, '12.5'],
    [Number.NaN, 'unknown'],
  ])('%f reads %s', (value, text) => {
    expect(shortNumber(value)).toBe(text);
  });
});

describe('findings', () => {
  const lost = make({ code: 'lost-samples', severity: 'note' });
  const illegal = make({ code: 'illegal-state', causedBy: 'lost-samples' });
  const flip = make({ code: 'direction-flip', severity: 'fault', causedBy: 'illegal-state' });

  it('folds a chain of consequences under its root', () => {
    const folded = foldFindings([flip, illegal, lost]);
    expect(folded).toHaveLength(1);
    expect(folded[0]!.finding).toBe(lost);
    expect(folded[0]!.follows).toEqual([illegal, flip]);
  });
  it('shows a consequence whose cause is gone', () => {
    expect(foldFindings([flip]).map((f) => f.finding)).toEqual([flip]);
  });
  it('loses nothing in a ring of causes', () => {
    const a = make({ code: 'run-out', causedBy: 'uneven-teeth' });
    const b = make({ code: 'uneven-teeth', causedBy: 'run-out' });
    expect(foldFindings([a, b])).toHaveLength(2);
  });
  it('tells consequences of one kind once', () => {
    const flips = [14, 2, 2].map((n) => make({ code: 'direction-flip', message: `Changed ${n} times.` }));
    expect(foldAlike([...flips, illegal])).toEqual([
      { finding: flips[0], times: 3 },
      { finding: illegal, times: 1 },
    ]);
  });
  it('puts the worst first and says how many', () => {
    expect(worstFirst([lost, flip])[0]).toBe(flip);
    expect(healthOf([lost, flip])).toEqual({ status: 'fault', word: '2 findings' });
    expect(healthOf([])).toEqual({ status: 'good', word: 'no findings' });
  });
});
