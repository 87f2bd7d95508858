import { describe, expect, it } from 'vitest';
import { timeScale } from '@/client/drawings/time-axis';
import { calmColumns, steadyRange, tracePaths, wantedRange } from '@/client/drawings/trace';

const time = timeScale(0, 10, 0, 100);
const y = (v: number) => 100 - v * 10;
const noClip = { lowV: null, highV: null };
const one = (v: (number | null)[]) => ({ firstS: 0, stepS: 1, min: v, max: v });

describe('tracePaths', () => {
  it('runs through single samples', () => {
    expect(tracePaths(one([1, 2, 3]), time, y, noClip).trace).toBe('M0.0 90.0h.01L10.0 80.0L20.0 70.0');
  });
  it('draws a column along its extremes, the nearer end first', () => {
    const columns = { firstS: 0, stepS: 1, min: [1, 1], max: [3, 3] };
    expect(tracePaths(columns, time, y, noClip).trace).toBe('M0.0 70.0L0.0 90.0L10.0 90.0L10.0 70.0');
  });
  it('breaks where samples are missing', () => {
    const { trace } = tracePaths(one([1, null, 3]), time, y, noClip);
    expect(trace.match(/M/g)).toHaveLength(2);
    expect(trace).not.toContain('L');
  });
  it('breaks at a gap narrower than a column', () => {
    const { trace } = tracePaths(one([1, 2, 3, 4]), time, y, noClip, [1.4]);
    expect(trace).toBe('M0.0 90.0h.01L10.0 80.0M20.0 70.0h.01L30.0 60.0');
  });
  it('leaves out what lies outside of the window', () => {
    const { trace } = tracePaths(one(new Array<number>(50).fill(1)), time, y, noClip);
    expect(trace.match(/L/g)).toHaveLength(10);
  });
  it('gives clipped columns once more', () => {
    const { clipped } = tracePaths(one([1, 5, 5, 1]), time, y, { lowV: null, highV: 5 });
    expect(clipped).toBe('M10.0 50.0h.01L20.0 50.0');
  });
});

describe('calmColumns', () => {
  const range = { lowV: 0, highV: 10 };
  const columns = { firstS: 0, stepS: 1, min: [1, 2, null, 4.5], max: [2, 8, null, 5] };
  it('takes the middle of flat columns and leaves the others', () => {
    const calm = calmColumns(columns, range, noClip);
    expect(calm.min).toEqual([1.5, 2, null, 4.75]);
    expect(calm.max).toEqual([1.5, 8, null, 4.75]);
  });
  it('leaves what stands at a clip level', () => {
    expect(calmColumns(columns, range, { lowV: 1, highV: 5 })).toMatchObject({
      min: columns.min,
      max: columns.max,
    });
  });
});

describe('ranges', () => {
  it('holds swing, band and samples', () => {
    const range = wantedRange(one([0.5, 2.5]), [null, 0.4, 2.9]);
    expect(range.lowV).toBeCloseTo(0.3, 6);
    expect(range.highV).toBeCloseTo(3, 6);
  });
  it('stays while the signal fits, grows at once, shrinks when far too big', () => {
    const before = { lowV: 0, highV: 3 };
    expect(steadyRange(before, { lowV: 0.2, highV: 2.9 })).toBe(before);
    expect(steadyRange(before, { lowV: 0, highV: 4 })).toEqual({ lowV: 0, highV: 4 });
    expect(steadyRange(before, { lowV: 1, highV: 2 })).toEqual({ lowV: 1, highV: 2 });
  });
  it('has a range without any sample', () => {
    expect(wantedRange(one([null]), [])).toEqual({ lowV: 0, highV: 1 });
  });
});
