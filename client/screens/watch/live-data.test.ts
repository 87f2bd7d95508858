import { describe, expect, it } from 'vitest';
import { rateText, ribbonDataOf, sparkPoints, teethWords } from '@/client/screens/watch/live-data';

const lane = {
  channel: 'A',
  min: [1],
  max: [1],
  lowV: 0,
  highV: 2,
  operateV: 1.2,
  releaseV: null,
  clipLowV: null,
  clipHighV: null,
};
const ribbon = {
  fromS: 1,
  toS: 2,
  anchor: 'edge' as const,
  signal: 'raw' as const,
  firstS: 1,
  stepS: 0.1,
  lanes: [lane],
  edges: [],
  rejected: [],
  edgeCounts: [],
  gaps: [],
};

describe('ribbonDataOf', () => {
  it('says how many teeth there are where the marks were thinned, and leaves counting to the list else', () => {
    const edges = [{ channel: 'A', t: 1.5, rising: true, direction: 'unknown' as const }];
    const of = (count: number) =>
      ribbonDataOf({ ...ribbon, edges, edgeCounts: [{ channel: 'A', edges: count, rejected: 3 }] }, [])
        .counts;
    expect(of(4001)).toEqual({ teeth: 2001, rejected: 3 });
    expect(of(1)).toBeUndefined();
  });

  it('draws a band only where both its points are known', () => {
    expect(ribbonDataOf(ribbon, []).lanes[0]!.bands).toEqual([]);
    const known = ribbonDataOf({ ...ribbon, lanes: [{ ...lane, releaseV: 0.8 }] }, []);
    expect(known.lanes[0]!.bands).toEqual([{ from: 1, to: 2, operateV: 1.2, releaseV: 0.8 }]);
  });
});

describe('sparkPoints', () => {
  it('counts up to now and forgets what is older than a minute', () => {
    expect(sparkPoints({ agoS: [70, 10, 0], rpm: [1, 2, null] })).toEqual([
      { t: -10, rpm: 2 },
      { t: -0, rpm: null },
    ]);
    expect(sparkPoints(null)).toEqual([]);
  });
});

describe('words', () => {
  it('names teeth and rates', () => {
    expect(teethWords(24, 'quadrature')).toBe('24\u00a0teeth\u00a0a\u00a0turn');
    expect(teethWords(1, 'three-hall')).toBe('1\u00a0pole\u00a0pair\u00a0a\u00a0turn');
    expect(rateText(20000)).toBe('20 kS/s');
    expect(rateText(12)).toBe('12 S/s');
    expect(rateText(1_250_000)).toBe('1.25 MS/s');
  });
});
