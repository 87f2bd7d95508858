import { describe, expect, it } from 'vitest';
import { gapsOfCapture } from './capture-gaps';

const gap = (fromIndex: number, lostSamples: number, estimated = false) => ({
  fromIndex,
  lostSamples,
  estimated,
});

describe('gapsOfCapture', () => {
  it('knows of a hole what the stream knew', () => {
    expect(gapsOfCapture([{ from: 10, to: 15 }], [gap(10, 5, true)], 30)).toEqual([gap(10, 5, true)]);
  });
  it('cuts a gap that reaches over the start or the end', () => {
    const holes = [
      { from: 0, to: 3 },
      { from: 25, to: 30 },
    ];
    expect(gapsOfCapture(holes, [gap(-10, 13, true), gap(25, 50)], 30)).toEqual([
      gap(0, 3, true),
      gap(25, 5),
    ]);
  });
  it('makes a gap of every hole that nobody knew, also beside a known one', () => {
    expect(gapsOfCapture([{ from: 5, to: 20 }], [gap(8, 4, true)], 30)).toEqual([
      gap(5, 3),
      gap(8, 4, true),
      gap(12, 8),
    ]);
  });
  it('does not believe in a gap where there are samples', () => {
    expect(gapsOfCapture([], [gap(5, 3)], 30)).toEqual([]);
  });
  it('keeps a loss of no sample that lies between samples', () => {
    expect(
      gapsOfCapture([{ from: 10, to: 12 }], [gap(5, 0, true), gap(10, 0), gap(0, 0), gap(30, 0)], 30),
    ).toEqual([gap(5, 0, true), gap(10, 2)]);
  });
});
