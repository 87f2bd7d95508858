/** What of rate, start, hold-off and speed settings the signal path cannot work with. */
import type { Settings } from '@/signal/model';
import type { SetupIssue } from '@/signal/pipeline-types';

/** What is wrong with a sample rate, or null; a rate that is not known yet (null) is not wrong. */
export function rateIssue(rateHz: number | null): SetupIssue | null {
  if (rateHz === null || (rateHz >= 1 && rateHz <= 1_000_000)) return null;
  return {
    code: 'bad-rate',
    pointer: '/rateHz',
    detail: `A sample rate of ${rateHz} Hz is outside 1 Hz to 1 MHz.`,
  };
}

/** What is wrong with the sample number that a stream begins at, or null. */
export function startIssue(startIndex: number): SetupIssue | null {
  if (Number.isSafeInteger(startIndex) && startIndex >= 0) return null;
  return {
    code: 'bad-start',
    pointer: '/startIndex',
    detail: `A stream cannot begin at sample ${startIndex}: whole numbers from 0 on.`,
  };
}

/** Longer than any stream lasts, and shorter than any edge is timed: beyond them it is a slip of the pen. */
const longestS = 1e6;
const shortestS = 1e-9;

/** What is wrong with the hold-off, or null. */
export function holdoffIssue({ holdoffS }: Pick<Settings, 'holdoffS'>): SetupIssue | null {
  if (!(holdoffS >= 0 && holdoffS <= longestS)) {
    return { code: 'bad-holdoff', pointer: '/holdoffS', detail: 'The hold-off must be 0 s or more.' };
  }
  return null;
}

/** The first thing that is wrong with how the speed is taken, or null. */
export function speedIssue({ speed }: Pick<Settings, 'speed'>): SetupIssue | null {
  if (!['tooth', 'turn', 'window'].includes(speed.method)) {
    return { code: 'bad-speed', pointer: '/speed/method', detail: 'The method is tooth, turn or window.' };
  }
  if (!(speed.windowS >= shortestS && speed.windowS <= longestS)) {
    return { code: 'bad-speed', pointer: '/speed/windowS', detail: 'The window must be longer than 0 s.' };
  }
  if (!(speed.stoppedAfterS >= shortestS && speed.stoppedAfterS <= longestS)) {
    return {
      code: 'bad-speed',
      pointer: '/speed/stoppedAfterS',
      detail: 'The time until stopped must be longer than 0 s.',
    };
  }
  return null;
}
