/**
 * The door of the signal path: what a rig and its settings must satisfy before a pipeline can be built from them.
 * The API's routes ask the same question when settings are saved, then mostly without a rate.
 */
import type { RigSetup, Settings } from '@/signal/model';
import type { SetupIssue } from '@/signal/pipeline-types';
import { bandIssue } from '@/signal/validate-band';
import { filterIssues } from '@/signal/validate-filter';
import { channelIssue, rigNumberIssue, wheelIssue } from '@/signal/validate-rig';
import { holdoffIssue, rateIssue, speedIssue, startIssue } from '@/signal/validate-timing';

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
    holdoffIssue(settings) ??
    speedIssue(settings)
  );
}
