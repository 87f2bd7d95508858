/**
 * The door of the signal path: what a rig and its settings must satisfy before a pipeline can be built from them.
 * The API's routes ask the same question when settings are saved, then mostly without a rate.
 */
import type { RigSetup, Settings } from '@/signal/model';
import type { SetupIssue } from '@/signal/pipeline-types';
import { bandIssue } from '@/signal/validate-band';
import { filterIssues } from '@/signal/validate-filter';
import { channelIssue, rigNumberIssue, wheelIssue } from '@/signal/validate-rig';

export { neededRoles } from '@/signal/validate-rig';

/**
 * The first thing that is wrong, or null.
 * @param rateHz samples per second, or null where no board has told it yet: cutoffs are then only checked for sign, and the
 * band not against what the channels can show, since neither is known for good before a stream begins.
 * @param channels names of the channels present, or null for all of the rig's.
 */
export function validateSetup(
  rig: RigSetup,
  settings: Settings,
  rateHz: number | null,
  channels: readonly string[] | null,
  startIndex = 0,
): SetupIssue | null {
  return (
    rateIssue(rateHz) ??
    startIssue(startIndex) ??
    wheelIssue(rig) ??
    rigNumberIssue(rig) ??
    channelIssue(rig, channels) ??
    filterIssues(settings, rateHz) ??
    bandIssue(rig, settings, rateHz !== null, channels) ??
    timingIssue(settings)
  );
}

function rateIssue(rateHz: number | null): SetupIssue | null {
  if (rateHz === null || (rateHz >= 1 && rateHz <= 1_000_000)) return null;
  return {
    code: 'bad-rate',
    pointer: '/rateHz',
    detail: `A sample rate of ${rateHz} Hz is outside 1 Hz to 1 MHz.`,
  };
}

function startIssue(startIndex: number): SetupIssue | null {
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

function timingIssue({ holdoffS, speed }: Settings): SetupIssue | null {
  if (!(holdoffS >= 0 && holdoffS <= longestS)) {
    return { code: 'bad-holdoff', pointer: '/holdoffS', detail: 'The hold-off must be 0 s or more.' };
  }
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
