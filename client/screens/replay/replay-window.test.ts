import { describe, expect, it } from 'vitest';
import {
  clampWindow,
  fetchFor,
  follow,
  neighbourOf,
  panBy,
  reveal,
  sensibleRate,
  spanOf,
  zoomAbout,
} from '@/client/screens/replay/replay-window';

describe('window', () => {
  it('stays inside of the capture', () => {
    expect(clampWindow({ fromS: -1, toS: 1 }, 10, 0.1)).toEqual({ fromS: 0, toS: 2 });
    expect(clampWindow({ fromS: 9, toS: 12 }, 10, 0.1)).toEqual({ fromS: 7, toS: 10 });
    expect(clampWindow({ fromS: -5, toS: 50 }, 10, 0.1)).toEqual({ fromS: 0, toS: 10 });
  });
  it('zooms about a point that stands still', () => {
    const zoomed = zoomAbout({ fromS: 2, toS: 6 }, 0.5, 3, 10, 0.1);
    expect(zoomed).toEqual({ fromS: 2.5, toS: 4.5 });
    expect(spanOf(zoomAbout(zoomed, 1e-9, 3, 10, 0.1))).toBeCloseTo(0.1, 9);
  });
  it('pans to the end and no further', () => {
    const panned = panBy({ fromS: 2, toS: 4 }, 99, 10);
    expect(panned).toEqual({ fromS: 8, toS: 10 });
  });
  it('follows the cursor at three quarters and finds it when it jumped', () => {
    const window = { fromS: 0, toS: 4 };
    expect(follow(window, 2.9, 10)).toBe(window);
    expect(follow(window, 3.5, 10)).toEqual({ fromS: 0.5, toS: 4.5 });
    expect(follow(window, 9, 10)).toEqual({ fromS: 6, toS: 10 });
    expect(reveal(window, 4, 10)).toBe(window);
  });
});

describe('fetchFor', () => {
  it('holds the window with room at either side, at a column a px', () => {
    const fetch = fetchFor({ fromS: 6.2, toS: 6.6 }, 400, 20);
    expect(fetch.fromS).toBeLessThan(6.2);
    expect(fetch.toS).toBeGreaterThan(6.6);
    expect(fetch.points / (fetch.toS - fetch.fromS)).toBeGreaterThanOrEqual(400 / 0.4);
  });
  it('asks for the same while the window moves within a cell', () => {
    const a = fetchFor({ fromS: 6.01, toS: 6.41 }, 400, 20);
    const b = fetchFor({ fromS: 6.3, toS: 6.7 }, 400, 20);
    expect(a).toEqual(b);
  });
  it('keeps to the capture and to what the hub takes', () => {
    const all = fetchFor({ fromS: 0, toS: 600 }, 1000, 600);
    expect(all).toMatchObject({ fromS: 0, toS: 600 });
    expect(all.points).toBeLessThanOrEqual(20_000);
  });
});

describe('playing', () => {
  it('chooses a rate at which the window takes seconds', () => {
    expect(sensibleRate(0.4)).toBe(0.05);
    expect(sensibleRate(0.033)).toBe(0.01);
    expect(sensibleRate(20)).toBe(1);
    expect(sensibleRate(1e-6)).toBe(0.001);
  });
});

describe('neighbourOf', () => {
  it('steps strictly past where the cursor is', () => {
    const edges = [1, 2, 3];
    expect(neighbourOf(edges, 2, 1)).toBe(3);
    expect(neighbourOf(edges, 2, -1)).toBe(1);
    expect(neighbourOf(edges, 2.5, -1)).toBe(2);
    expect(neighbourOf(edges, 3, 1)).toBeNull();
    expect(neighbourOf(edges, 1, -1)).toBeNull();
  });
});
