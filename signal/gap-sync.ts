/**
 * Sync with the gap of a missing-tooth wheel (N positions, M of them missing): where in the turn a tooth stands.
 *
 *     unsynced --a gap--> proving --exactly N positions, then a gap--> synced --anything that cannot be--> unsynced
 *
 * In sync, teeth that did not show and pulses that are no teeth are told from the wheel's own gap by where they come
 * (`gap-judge.ts`), so that one of them does not cost the sync; what cannot be explained loses it, with a reason.
 * Outside sync two gaps a turn cannot be told apart, so that nothing is believed before one turn held exactly one.
 */
import { beginProof, closeTurn } from '@/signal/gap-proof';
import { noteSpacing } from '@/signal/gap-spacing';

export type SyncState = 'unsynced' | 'proving' | 'synced';

export type SyncLoss =
  /** A gap came before all teeth had: the count was behind. */
  | 'early-gap'
  /** Where the gap was due teeth went on: the count was ahead, or the gap was filled. */
  | 'late-gap'
  /** More pulses than the wheel has teeth: exactly one before the gap, or too many to say which are the teeth. */
  | 'extra-tooth'
  /** A silence too long for its positions to be counted: some stop shorter than what is called stopped. */
  | 'timeout'
  | 'stopped'
  | 'reversed'
  | 'lost-samples';

export type GapSync = {
  positions: number;
  missing: number;
  state: SyncState;
  /** Why the sync that was there is gone; null in sync, and before the first. */
  lostBecause: SyncLoss | null;
  /** How often it was lost, by reason, since the stream began. */
  readonly losses: Record<SyncLoss, number>;
  /** Position of the last tooth, 0 the first after the gap; meaningless while unsynced. */
  position: number;
  /** Mean of the last gaps over the mean pitch beside them, in sync or not: M + 1 on a sound wheel; NaN: none seen. */
  gapRatio: number;
  /** Positions from one gap to the next as last seen, in sync or not, and how many times in a row; 0: not known. */
  betweenGaps: number;
  sameBetween: number;
  /** Pulses in sync that were recognised as no teeth. */
  extraPulses: number;
  /** Time for one position in the last interval, s; how many it spanned, and the time for one in the interval before. */
  perPositionS: number;
  lastSpans: number;
  olderS: number;
  /** The interval that is to be judged, s. */
  intervalS: number;
  /** An interval that waits for the next to be judged, s; NaN: none. */
  waitingS: number;
  /** What the last judgement says of a tooth that stands where the gap is due. */
  lateAs: 'late-gap' | 'extra-tooth';
  /** Why the last interval cannot be counted in positions; null: it can. */
  uncountable: 'timeout' | 'extra-tooth' | null;
  /** Teeth since the last extra pulse. */
  sinceExtra: number;
  /** The last gap and the time for one position before it, until the interval after it is known, s; NaN: none waits. */
  gapS: number;
  beforeGapS: number;
  sinceGap: number;
  /** Positions since a gap that came too early, or was a tooth that did not show; -1: there is none. */
  sinceDoubt: number;
  /** Missing positions passed while proving, which count once it is proven. */
  owed: number;
  /** The position is beyond doubt (see `gap-proof.ts`). */
  isProven: boolean;
  /** Pulses since the last gap, that after it left out, and in the turn before. */
  pulses: number;
  pulsesBefore: number;
};

function noLosses(): Record<SyncLoss, number> {
  const own = { 'early-gap': 0, 'late-gap': 0, 'extra-tooth': 0, timeout: 0 };
  return { ...own, stopped: 0, reversed: 0, 'lost-samples': 0 };
}

export function createGapSync(positions: number, missing: number): GapSync {
  return {
    positions,
    missing,
    state: 'unsynced',
    lostBecause: null,
    losses: noLosses(),
    position: 0,
    gapRatio: NaN,
    betweenGaps: 0,
    sameBetween: 0,
    extraPulses: 0,
    perPositionS: NaN,
    lastSpans: 1,
    olderS: NaN,
    intervalS: NaN,
    waitingS: NaN,
    lateAs: 'late-gap',
    uncountable: null,
    sinceExtra: 0,
    gapS: NaN,
    beforeGapS: NaN,
    sinceGap: -1,
    sinceDoubt: -1,
    owed: 0,
    isProven: false,
    pulses: 0,
    pulsesBefore: 0,
  };
}

/** Leaves the sync, if there was one, for a reason. */
export function loseSync(sync: GapSync, because: SyncLoss): void {
  if (sync.state === 'synced' && sync.missing > 0) {
    sync.lostBecause = because;
    sync.losses[because]++;
  }
  sync.state = 'unsynced';
  sync.position = 0;
  sync.sinceDoubt = -1;
}

/** Nothing is known of the teeth any more. The counters and what was learnt of the gap stay. */
export function resetSync(sync: GapSync, because: SyncLoss = 'stopped'): void {
  loseSync(sync, because);
  sync.perPositionS = sync.olderS = NaN;
  sync.waitingS = sync.gapS = NaN;
  sync.sinceGap = -1;
  sync.uncountable = null;
}

/**
 * Moves on by an interval of `spans` positions.
 * @returns missing positions that this proves were passed and that have not been counted: the gaps of a turn that has
 * just been proven, then each gap as it comes.
 */
export function moveOn(sync: GapSync, spans: number): number {
  const { positions, missing } = sync;
  if (missing === 0) {
    sync.position = (sync.position + 1) % positions;
    return 0;
  }
  noteSpacing(sync, spans);
  if (sync.uncountable) {
    loseSync(sync, sync.uncountable);
    sync.uncountable = null;
    return 0;
  }
  const gap = spans === missing + 1;
  const next = sync.position + spans;
  if (sync.state === 'synced') return moveInSync(sync, spans, next);
  if (sync.state === 'proving' && next <= positions - missing - 1 && !gap) {
    sync.position = next;
    sync.owed += spans - 1;
  } else if (sync.state === 'proving' && next === positions && gap) {
    sync.state = 'synced';
    sync.lostBecause = null;
    sync.position = 0;
    closeTurn(sync);
    return sync.owed + missing;
  } else if (gap) {
    prove(sync, 0);
  } else {
    sync.state = 'unsynced';
  }
  return 0;
}

function moveInSync(sync: GapSync, spans: number, next: number): number {
  const { positions, missing } = sync;
  const gap = spans > missing;
  const last = positions - missing - 1;
  if (next >= positions) {
    sync.position = next - positions;
    sync.sinceDoubt = -1;
    closeTurn(sync);
    return spans - 1;
  }
  if (next <= last) {
    // A tooth that did not show, or the gap before its time: the place where the gap is due will tell.
    if (gap) sync.sinceDoubt = 0;
    else if (sync.sinceDoubt >= 0) sync.sinceDoubt += spans;
    sync.position = next;
    return spans - 1;
  }
  const since = sync.sinceDoubt + spans;
  if (gap) {
    loseSync(sync, 'early-gap');
    prove(sync, 0);
  } else if (sync.sinceDoubt >= 0 && since <= last) {
    loseSync(sync, 'early-gap');
    prove(sync, since);
  } else {
    loseSync(sync, sync.lateAs);
  }
  return 0;
}

function prove(sync: GapSync, position: number): void {
  sync.state = 'proving';
  sync.position = position;
  sync.owed = sync.missing;
  beginProof(sync, position === 0);
}
