import type { Live } from '@/server/contract';

/** The number for the big display: no thousands sign, a true minus, decimals by size so that it does not jump. */
export function rpmText(rpm: number, errorRpm: number | null = null): string {
  const magnitude = Math.abs(rpm);
  const digits = magnitude >= 10_000 || (errorRpm ?? 0) >= 5 ? 0 : magnitude >= 10 || rpm === 0 ? 1 : 2;
  const text = magnitude.toFixed(rpm === 0 ? 0 : digits);
  return `${rpm < 0 && Number(text) !== 0 ? '\u2212' : ''}${text}`;
}

/** A bound or a floor: two significant digits, rounded up, since "at most" must stay true. */
export function boundText(rpm: number): string {
  if (!(rpm > 0)) return '0';
  const unit = 10 ** (Math.floor(Math.log10(rpm)) - 1);
  const up = Math.ceil(rpm / unit - 1e-9) * unit;
  return up >= 100 ? up.toFixed(0) : String(Number(up.toPrecision(2)));
}

export type SpeedSaying = {
  /** What stands big: a number with its unit, or a word. */
  big: { kind: 'number'; text: string } | { kind: 'word'; text: string };
  direction: 'forward' | 'reverse' | 'stopped' | 'unknown' | null;
  /** The word of direction; null where there is none to say. */
  directionWord: string | null;
  small: string;
  /** Live, or no longer true. */
  loud: boolean;
};

export type SpeedSource = {
  live: Live | null;
  /** Frames have stopped coming. */
  stale: boolean;
  /** Clock of the last block, as text of the reader's zone; null where none ever came. */
  lastBlockText: string | null;
  /** No block for 2 s by this device's own count. */
  blockLate: boolean;
  connected: boolean;
  sensing: string;
};

/** A late edge is only worth a word once people can read it, s. */
const boundAfterS = 0.25;

/** The one place that decides what the speed panel says. A number that is not live is never shown. */
export function speedSaying({
  live,
  stale,
  lastBlockText,
  blockLate,
  connected,
  sensing,
}: SpeedSource): SpeedSaying {
  if (!live || !connected || stale) {
    const since = lastBlockText
      ? `nothing from the hub, last block ${lastBlockText}`
      : 'nothing from the hub yet';
    return word(connected && !live ? 'connecting' : 'not live', since);
  }
  if (live.state === 'waiting') return word('waiting', 'no block ever; Connect shows how to send one', false);
  if (live.state === 'silent' || blockLate)
    return word('silent', lastBlockText ? `no block since ${lastBlockText}` : 'no block');
  if (live.state === 'unknown') {
    const most = live.speedAtMostRpm;
    return {
      ...word('unknown', most === null ? 'blocks arrive, no edge yet' : `at most ${boundText(most)} rpm`),
      ...directionOf(live, sensing),
    };
  }
  if (live.state === 'stopped') {
    const floor = live.speedAtMostRpm === null ? 'no edge' : `below ${boundText(live.speedAtMostRpm)} rpm`;
    const since = live.sinceLastEdgeS === null ? '' : ` for ${sinceText(live.sinceLastEdgeS)}`;
    return {
      big: { kind: 'word', text: 'stopped' },
      direction: 'stopped',
      directionWord: null,
      small: `${floor}${since}`,
      loud: false,
    };
  }
  if (live.speedRpm === null) {
    const most = live.speedAtMostRpm;
    return {
      ...word('unknown', most === null ? 'no speed yet' : `at most ${boundText(most)} rpm`),
      ...directionOf(live, sensing),
    };
  }
  const most = live.speedAtMostRpm;
  const late =
    most !== null && (live.sinceLastEdgeS ?? 0) > boundAfterS && Math.abs(live.speedRpm) >= most * (1 - 1e-9);
  if (late) {
    return {
      big: { kind: 'number', text: `\u2264 ${boundText(most)}` },
      ...directionOf(live, sensing),
      small: `at most ${boundText(most)}; the next edge is late`,
      loud: false,
    };
  }
  // While an edge is overdue the hub's error grows to the speed itself: that says no more than the number does.
  const known = live.speedErrorRpm !== null && live.speedErrorRpm < Math.abs(live.speedRpm) / 2;
  const errorRpm = known ? live.speedErrorRpm : null;
  return {
    big: { kind: 'number', text: rpmText(live.speedRpm, errorRpm) },
    ...directionOf(live, sensing),
    small: errorRpm === null ? '' : `± ${errorText(errorRpm)}`,
    loud: false,
  };
}

function word(text: string, small: string, loud = true): SpeedSaying {
  return { big: { kind: 'word', text }, direction: null, directionWord: null, small, loud };
}

/** One channel cannot tell a direction: no arrow is claimed. */
function directionOf(live: Live, sensing: string): Pick<SpeedSaying, 'direction' | 'directionWord'> {
  if (sensing === 'single') return { direction: 'unknown', directionWord: 'direction not sensed' };
  if (live.direction === 'unknown') return { direction: 'unknown', directionWord: 'direction unknown' };
  return { direction: live.direction, directionWord: live.direction };
}

export function errorText(errorRpm: number): string {
  if (errorRpm === 0) return '0';
  return errorRpm >= 10
    ? errorRpm.toFixed(0)
    : errorRpm >= 0.095
      ? errorRpm.toFixed(1)
      : errorRpm.toPrecision(1);
}

/** "12 s", "3 min", "2 h": how long something has lasted. */
export function sinceText(s: number): string {
  if (s < 120) return `${Math.floor(s)} s`;
  if (s < 7200) return `${Math.floor(s / 60)} min`;
  return `${Math.floor(s / 3600)} h`;
}
