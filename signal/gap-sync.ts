/**
 * The gap of a missing-tooth wheel: how many positions an interval spans, and where in the turn a tooth stands.
 *
 * An interval is long when it is more than sqrt(M + 1) times the time for one position before it, the geometric middle
 * between a tooth and a gap of M missing positions. Outside sync, or where no gap is due, a long interval is believed only
 * once the next one is short again by the same ratio (else the shaft just slowed down). In sync means: from one gap
 * to the next exactly N positions were passed.
 */
export type SyncState = 'unsynced' | 'proving' | 'synced';

export type GapSync = {
  positions: number;
  missing: number;
  state: SyncState;
  /** Position of the last tooth, 0 the first after the gap; meaningless while unsynced. */
  position: number;
  /** Time for one position, s; NaN: not known. */
  perPositionS: number;
  /** The interval that is to be judged, s. */
  intervalS: number;
  /** A long interval that waits for the next to be judged, s; NaN: none. */
  waitingS: number;
};

export function createGapSync(positions: number, missing: number): GapSync {
  return {
    positions,
    missing,
    state: 'unsynced',
    position: 0,
    perPositionS: NaN,
    intervalS: NaN,
    waitingS: NaN,
  };
}

export function resetSync(sync: GapSync): void {
  sync.state = 'unsynced';
  sync.position = 0;
  sync.perPositionS = NaN;
  sync.waitingS = NaN;
}

/** Ratio from which an interval is long. */
function threshold(sync: GapSync): number {
  return Math.sqrt(sync.missing + 1);
}

function gapIsDue(sync: GapSync): boolean {
  return sync.state === 'synced' && sync.position === sync.positions - sync.missing - 1;
}

/** True where no gap can come next, so that one silent position is all there can be. */
export function noGapAhead(sync: GapSync): boolean {
  return sync.missing === 0 || (sync.state === 'synced' && !gapIsDue(sync));
}

/**
 * Judges the interval that a tooth closes, `sync.intervalS`.
 * @returns positions that it spans, or 0 where that must wait for the next tooth.
 */
export function judgeInterval(sync: GapSync): number {
  const { intervalS } = sync;
  if (sync.missing === 0 || Number.isNaN(sync.perPositionS)) {
    sync.perPositionS = intervalS;
    return 1;
  }
  const ratio = intervalS / sync.perPositionS;
  if (ratio <= threshold(sync)) {
    sync.perPositionS = intervalS;
    return 1;
  }
  const whole = sync.missing + 1;
  if (gapIsDue(sync) && ratio < whole * threshold(sync)) {
    sync.perPositionS = intervalS / whole;
    return whole;
  }
  sync.waitingS = intervalS;
  return 0;
}

/** Judges the interval that waited, now that the next one, `sync.intervalS`, is known. */
export function judgeWaiting(sync: GapSync): number {
  const nextS = sync.intervalS;
  const waited = sync.waitingS;
  sync.waitingS = NaN;
  const believed = nextS < waited / threshold(sync);
  // The mean of both sides follows a shaft that speeds up or slows down across the gap.
  const each = (sync.perPositionS + nextS) / 2;
  const spans = believed ? Math.max(1, Math.round(waited / each)) : 1;
  sync.perPositionS = waited / spans;
  return spans;
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
  const gap = spans === missing + 1;
  if (sync.state === 'unsynced') {
    if (gap) {
      sync.state = 'proving';
      sync.position = 0;
    }
    return 0;
  }
  const next = sync.position + spans;
  if (next === positions && gap) {
    const proven = sync.state === 'proving';
    sync.state = 'synced';
    sync.position = 0;
    return proven ? 2 * missing : missing;
  }
  if (next > positions - missing - 1) {
    sync.state = gap ? 'proving' : 'unsynced';
    sync.position = 0;
    return 0;
  }
  sync.position = next;
  return sync.state === 'synced' ? spans - 1 : 0;
}
