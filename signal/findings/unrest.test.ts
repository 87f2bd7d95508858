import { describe, expect, it } from 'vitest';
import { unrestOf } from '@/signal/findings/unrest';
import { createToothLog } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

/** Teeth of 1 V, so far apart. */
function logOf(intervals: readonly number[]): ToothLog {
  const log = createToothLog(24, 1);
  let riseS = 1;
  for (const intervalS of [...intervals, 0]) {
    log.riseS[log.count & log.mask] = riseS;
    log.troughV[log.count & log.mask] = 1;
    log.peakV[log.count & log.mask] = 2;
    log.count++;
    riseS += intervalS;
  }
  return log;
}

const isIrregular = (intervals: readonly number[], missing: number) =>
  unrestOf(logOf(intervals), -Infinity, 0.001, missing)!.isIrregular;

describe('intervals that are longer and shorter by turns', () => {
  it('are told from those that all change the same way', () => {
    expect(isIrregular([0.5, 0.8, 0.4, 0.7, 0.45, 0.3, 0.6], 0)).toBe(true);
    expect(isIrregular([0.1, 0.12, 0.15, 0.2, 0.26, 0.35, 0.5], 0)).toBe(false);
  });

  it("are not made by the wheel's own gap, even where the shaft speeds up over it", () => {
    const gap = [1.7, 1.7, 5.1, 1.7, 1.7, 1.7, 1.7];
    expect(isIrregular(gap, 2)).toBe(false);
    // Slowed down at first, then over two empty places ever faster: the gap is as long as one of the teeth before.
    const speedsUp = [0.83, 1.7, 1.71, 1.69, 1.7, 1.48, 1.74];
    expect(isIrregular(speedsUp, 0)).toBe(true);
    expect(isIrregular(speedsUp, 2)).toBe(false);
    expect(isIrregular([0.5, 0.8, 0.4, 0.7, 0.45, 0.3, 0.6], 2)).toBe(true);
  });
});
