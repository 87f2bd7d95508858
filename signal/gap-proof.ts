/**
 * Whether the position in the turn is beyond doubt: what silence proves of the speed must hold whatever the sync believes.
 *
 * A shaft that is stopped hard makes intervals that read as teeth which did not show, or as a gap before its time. The sync
 * then believes the likelier reading, and may be off until its next gap. So a turn proves the position only where its pulses
 * are as many as the wheel has teeth, or as many as in the turn before, as on a wheel that lacks one; and an interval that
 * could be read in another way puts it in doubt until the next turn is over.
 */
import type { GapSync } from '@/signal/gap-sync';

/** A turn begins. @param isWhole no pulse of it has passed yet. */
export function beginProof(sync: GapSync, isWhole: boolean): void {
  sync.isProven = false;
  sync.pulses = isWhole ? 0 : -sync.positions;
  sync.pulsesBefore = 0;
}

/** The gap was passed, where sync has it. */
export function closeTurn(sync: GapSync): void {
  const { pulses, positions, missing, pulsesBefore } = sync;
  sync.isProven = pulses === positions - missing || pulses === pulsesBefore;
  sync.pulsesBefore = pulses;
  sync.pulses = 0;
}

/**
 * The interval `waitingS` is read as `spans` positions (0: as ending at a pulse that is no tooth). A short one is no reason
 * for doubt where it is read as one position: were its pulse no tooth, the gap would come later than believed.
 */
export function noteReading(sync: GapSync, waitingS: number, spans: number): void {
  if (spans === 1 && waitingS < sync.perPositionS) return;
  if (!gapIsDue(sync) || spans !== sync.missing + 1) sync.isProven = false;
}

export function gapIsDue(sync: GapSync): boolean {
  return sync.state === 'synced' && sync.position === sync.positions - sync.missing - 1;
}

/** True where no gap can come next, so that one silent position is all there can be. */
export function noGapAhead(sync: GapSync): boolean {
  if (sync.missing === 0) return true;
  return sync.state === 'synced' && sync.isProven && !gapIsDue(sync) && Number.isNaN(sync.waitingS);
}
