import { describe, expect, it } from 'vitest';
import type { Analysis } from '@/signal/model';
import {
  aroundWindow,
  bandsIn,
  edgesOf,
  findingWindow,
  firstWindow,
  inWindow,
  laneOf,
} from '@/client/screens/replay/replay-data';

const at = (...ts: number[]) => ts.map((t) => ({ t }));
const none = { clipLowV: null, clipHighV: null };
const window = { fromS: 1, toS: 2 };

function analysisOf(change: Partial<Analysis> = {}): Analysis {
  const edges = Array.from({ length: 100 }, (_, i) => ({ t: i / 10, midT: i / 10, rising: i % 2 === 0 }));
  return {
    channels: { A: { lowV: 0.4, highV: 2.9, operateV: 1.9, releaseV: 1.4, band: [], edges } },
    speed: [],
    direction: [
      { from: 0, to: 5, value: 'forward' },
      { from: 5, to: 10, value: 'reverse' },
    ],
    turns: 0,
    positions: 0,
    pulses: 0,
    gaps: [],
    delayS: 0,
    margin: null,
    wheelFace: null,
    statistics: null,
    findings: [],
    ...change,
  };
}

describe('laneOf', () => {
  it('puts samples at their instants and columns at their middle', () => {
    const raw = laneOf(
      'A',
      { channel: 'A', rateHz: 10, fromS: 1, stepS: 0.1, kind: 'raw', v: [1, null] },
      undefined,
      none,
      window,
    );
    expect([raw.firstS, raw.min, raw.max]).toEqual([1, [1, null], [1, null]]);
    const folded = laneOf(
      'A',
      { channel: 'A', rateHz: 10, fromS: 1, stepS: 0.5, kind: 'minmax', min: [0], max: [2] },
      undefined,
      none,
      window,
    );
    expect([folded.firstS, folded.min, folded.max]).toEqual([1.25, [0], [2]]);
  });
});

describe('bandsIn', () => {
  const band = [0, 0.5, 1.5, 3].map((t) => ({ t, operateV: t, releaseV: 0 }));
  it('takes the stretches in force within the window', () => {
    expect(bandsIn({ band, operateV: 9, releaseV: 8 }, window)).toEqual([
      { from: 1, to: 1.5, operateV: 0.5, releaseV: 0 },
      { from: 1.5, to: 2, operateV: 1.5, releaseV: 0 },
    ]);
  });
  it('falls back to one band, or none where it is not known', () => {
    expect(bandsIn({ band: [], operateV: 2, releaseV: 1 }, window)).toEqual([
      { from: 1, to: 2, operateV: 2, releaseV: 1 },
    ]);
    expect(bandsIn({ band: [], operateV: null, releaseV: 1 }, window)).toEqual([]);
  });
  it('thins a band that moves with every tooth', () => {
    const many = Array.from({ length: 10_000 }, (_, i) => ({ t: i / 1000, operateV: 1, releaseV: 0 }));
    const stretches = bandsIn({ band: many, operateV: 1, releaseV: 0 }, { fromS: 0, toS: 10 });
    expect(stretches.length).toBeLessThanOrEqual(160);
    expect(stretches.at(-1)!.to).toBe(10);
  });
});

describe('edges', () => {
  it('carry the direction that held', () => {
    const edges = edgesOf(analysisOf());
    expect(edges[10]!.direction).toBe('forward');
    expect(edges[80]!.direction).toBe('reverse');
  });
  it('are cut to the window, with neighbours where a line needs them', () => {
    expect(inWindow(at(0, 1, 1.5, 2, 3), window)).toEqual(at(1, 1.5, 2));
    expect(aroundWindow(at(0, 0.5, 1.5, 2.5, 3), window)).toEqual(at(0.5, 1.5, 2.5));
  });
});

describe('findingWindow', () => {
  const whole = { fromS: 0, toS: 10 };
  const show = (from: number, to: number | null, at: number, now = whole, change = {}) => {
    const { fromS, toS } = findingWindow(analysisOf(change), { channel: 'A', from, to, at }, now, 10);
    return [fromS, toS].map((s) => Number(s.toFixed(6)));
  };
  it('is about eight teeth around the instant where the stretch is long or still open', () => {
    expect(show(0, 9, 6)).toEqual([5.2, 6.8]);
    expect(show(1, null, 6)).toEqual([5.2, 6.8]);
  });
  it('is the whole stretch where that is short', () => {
    expect(show(4, 6, 4.1)).toEqual([3.75, 6.25]);
    expect(show(4, 4.1, 4)).toEqual([3.25, 4.85]);
  });
  it('stays as close as it was', () => {
    expect(show(4, 6, 4, { fromS: 1, toS: 1.4 })).toEqual([3.8, 4.2]);
  });
  it('shows a gap whole, however close it was', () => {
    const gaps = [{ from: 3, to: 7, samples: 40 }];
    expect(show(3, 7, 3, { fromS: 1, toS: 1.4 }, { gaps })).toEqual([2, 8]);
  });
});

describe('firstWindow', () => {
  it('starts at the worst finding with some teeth around it', () => {
    const finding = {
      code: 'weak-swing',
      channel: 'A',
      from: 0,
      to: 9,
      outcome: 'found',
      evidence: {},
      message: '',
      remedy: '',
      causedBy: null,
    } as const;
    const findings = [
      { ...finding, severity: 'note' as const, at: 1 },
      { ...finding, severity: 'fault' as const, at: 6 },
    ];
    const start = firstWindow(analysisOf({ findings }), 10);
    expect(start.cursorS).toBe(6);
    expect(start.window.fromS).toBeLessThan(6);
    expect(start.window.toS).toBeGreaterThan(6);
    expect(start.window.toS - start.window.fromS).toBeCloseTo(1.6, 6);
  });
  it('starts at the beginning without findings or edges', () => {
    const start = firstWindow(analysisOf({ channels: {} }), 0.2);
    expect(start).toEqual({ window: { fromS: 0, toS: 0.2 }, cursorS: 0 });
  });
});
