import { describe, expect, it } from 'vitest';
import { edgeLate, edgeRising } from '@/signal/pipeline-types';
import { runDetector } from '@/signal/detector';
import { createDetector, keepState, setThresholds } from '@/signal/detector-state';

type Seen = { edges: [number, number, string][]; rejected: number[] };

/** Runs a short signal through a band of 1 V to 2 V; `v[0]` is its own neighbour, as at the start of a stream. */
function run(samples: number[], holdSamples = 0, operateV = 2, releaseV = 1): Seen {
  const seen: Seen = { edges: [], rejected: [] };
  const detector = createDetector(holdSamples, false);
  setThresholds(detector, operateV, releaseV);
  const v = Float64Array.of(samples[0]!, ...samples);
  runDetector(detector, v, 1, samples.length, -1, {
    rejected: (at) => seen.rejected.push(at),
    wobble: () => undefined,
  });
  const { count, at, midAt, flags } = detector.edges;
  for (let k = 0; k < count; k++) {
    const kind = flags[k]! & edgeRising ? 'rising' : 'falling';
    seen.edges.push([at[k]!, midAt[k]!, flags[k]! & edgeLate ? `${kind} late` : kind]);
  }
  return seen;
}

describe('hysteresis band', () => {
  it('interpolates both instants of an edge', () => {
    // Crosses mid (1.5 V) half way from sample 1 to 2, operate (2 V) where sample 2 is reached exactly half way to 3.
    expect(run([0, 1, 2, 2.5]).edges).toEqual([[2, 1.5, 'rising']]);
    expect(run([3, 1.75, 1.25, 0.75]).edges).toEqual([[2.5, 1.5, 'falling']]);
  });

  it('makes no edge of the first sample, nor of the first arrival beyond a threshold', () => {
    expect(run([3, 3, 3]).edges).toEqual([]);
    expect(run([1.5, 1.7, 2.5, 3]).edges).toEqual([]);
    expect(run([1.5, 0.5, 2.5]).edges).toHaveLength(1);
  });

  it('takes the last mid crossing on the flank', () => {
    const [edge] = run([0, 1.8, 1.2, 1.8, 2.2]).edges;
    expect(edge![1]).toBeCloseTo(2.5, 12);
    expect(edge![0]).toBeCloseTo(3.5, 12);
  });

  it('marks a peak that entered the band and did not make it', () => {
    const seen = run([0, 1.9, 0, 3]);
    expect(seen.edges).toHaveLength(1);
    expect(seen.rejected).toHaveLength(1);
    expect(seen.rejected[0]).toBeCloseTo(1.5 / 1.9, 12);
  });

  it('ignores ripple inside the band', () => {
    expect(run([0, 3, 1.2, 1.9, 1.1, 1.8, 3, 0]).edges.map(([, , kind]) => kind)).toEqual([
      'rising',
      'falling',
    ]);
  });
});

describe('hold-off', () => {
  it('ignores crossings of either polarity and marks them', () => {
    const seen = run([0, 3, 0, 3, 3, 3, 0], 3);
    expect(seen.edges.map(([, , kind]) => kind)).toEqual(['rising', 'falling']);
    expect(seen.rejected).toHaveLength(2);
  });

  it('makes a late edge where the signal stands beyond the other threshold at its end', () => {
    const seen = run([0, 4, 0, 0, 0, 0, 0], 3);
    // Rising at 0.5 (2 V of 4 V): held until 3.5. Mid was crossed downwards at 1 + 2.5 / 4.
    expect(seen.edges).toEqual([
      [0.5, 0.375, 'rising'],
      [3.5, 1.625, 'falling late'],
    ]);
    expect(seen.rejected).toHaveLength(1);
  });

  it('makes none where the signal came back in time', () => {
    expect(run([0, 4, 0, 4, 4, 4, 4], 3).edges).toHaveLength(1);
  });

  it('takes a crossing after its end as an ordinary edge', () => {
    const seen = run([0, 4, 4, 4, 0, 0], 3);
    expect(seen.edges.map(([at, , kind]) => [at, kind])).toEqual([
      [0.5, 'rising'],
      [3.75, 'falling'],
    ]);
  });
});

describe('a band that moves', () => {
  /** Falls through 1.5 V, whereupon the band of 1.5 to 2.5 V moves down to 0.5 to 1.2 V; then comes `rest`. */
  function moved(rest: number[]): [number, string][] {
    const detector = createDetector(0, false);
    setThresholds(detector, 2.5, 1.5);
    const v = Float64Array.of(3, 3, 1.4, ...rest);
    const sink = { rejected: () => undefined, wobble: () => undefined };
    runDetector(detector, v, 1, 2, 0, sink);
    setThresholds(detector, 1.2, 0.5);
    keepState(detector, 1.4);
    runDetector(detector, v, 3, v.length - 1, 0, sink);
    const { count, at, flags } = detector.edges;
    return Array.from({ length: count }, (_, k) => [at[k]!, flags[k]! & edgeRising ? 'rising' : 'falling']);
  }

  it('makes no edge by moving', () => {
    expect(moved([1.4, 1.3, 1.4, 1.6]).map(([, kind]) => kind)).toEqual(['falling']);
    expect(moved([1, 0.4, 0.8, 1.3]).map(([, kind]) => kind)).toEqual(['falling', 'rising']);
  });

  it('loses no edge where the signal turns back before it has come to the new band', () => {
    expect(moved([1.4, 2, 3, 3])).toEqual([
      [expect.closeTo(1.9375, 9), 'falling'],
      [4.5, 'rising'],
    ]);
    expect(moved([1.3, 2, 3, 0.4, 1.3]).map(([, kind]) => kind)).toEqual([
      'falling',
      'rising',
      'falling',
      'rising',
    ]);
  });
});
