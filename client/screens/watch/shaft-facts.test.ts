import { describe, expect, it } from 'vitest';
import { shaftFacts } from '@/client/screens/watch/shaft-facts';
import { liveFrame } from '@/tests/fakes/live-frame';

const plain = liveFrame('a').live.shaft!;
const value = (facts: ReturnType<typeof shaftFacts>, name: string) =>
  facts.find((fact) => fact.name === name)?.value;

describe('what stands behind the speed', () => {
  it('says an acceleration only where it can be told from none', () => {
    const of = (accelerationRpmPerS: number, accelerationErrorRpmPerS: number) =>
      value(shaftFacts({ ...plain, accelerationRpmPerS, accelerationErrorRpmPerS }), 'acceleration');
    expect(of(120.4, 2.2)).toBe('120.4 ± 2.2 rpm/s');
    expect(of(-3, 2.2)).toBe('below 4.4 rpm/s');
  });

  it('says how late the speed is and what it resolves, each only where it is known', () => {
    const of = (resolutionRpm: number | null, delayS: number | null) => {
      const facts = shaftFacts({ ...plain, limits: { resolutionRpm, delayS, floorRpm: 0.5 } });
      return [value(facts, 'speed is behind by'), value(facts, 'one sample is worth')];
    };
    expect(of(2.2534, 0.02)).toEqual(['20 ms', '2.3 rpm']);
    expect(of(0.0384, null)).toEqual([undefined, '0.038 rpm']);
    expect(of(null, 0.5)).toEqual(['500 ms', undefined]);
  });

  it('names why the gap of a wheel was lost, and how an index was met', () => {
    const facts = shaftFacts({
      ...plain,
      sync: { state: 'unsynced', lostBecause: 'late-gap', gapRatio: 3 },
      index: { expectedCounts: 24, meanCounts: 23.8, exactTurns: 10, lostTurns: 2, extraTurns: 0 },
      falseSteps: { illegal: 0, invalidStates: 0 },
    });
    expect(value(facts, 'wheel gap')).toBe('lost: the gap did not come');
    expect(value(facts, 'turns by index')).toBe('2 of 12 wrong');
    expect(value(facts, 'steps that cannot be')).toBeUndefined();
  });

  it('tells how far the learning of the teeth has come', () => {
    const pitch = { state: 'learning', turns: 7, turnsNeeded: 20, uneven: null } as const;
    expect(value(shaftFacts({ ...plain, pitch }), 'tooth spacing')).toBe('learning, turn 7 of 20');
    const over = { ...pitch, turns: 26 };
    expect(value(shaftFacts({ ...plain, pitch: over }), 'tooth spacing')).toBe('too unsteady to learn');
    const learnt = { ...pitch, state: 'in-use', uneven: 0.0123 } as const;
    expect(value(shaftFacts({ ...plain, pitch: learnt }), 'tooth spacing')).toBe('learnt, 1.2 % rms');
  });
});
