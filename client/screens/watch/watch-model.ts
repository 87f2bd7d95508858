import type { Rig } from '@/server/contract';
import { speedSaying } from '@/client/drawings/speed-words';
import type { SpeedSaying } from '@/client/drawings/speed-words';
import { healthOf } from '@/client/components/finding-words';
import { secondsSince } from '@/client/data/live-types';
import type { LiveRigView } from '@/client/data/use-live';

export type Health = { status: 'good' | 'note' | 'warn' | 'fault' | 'unknown'; word: string };

export type WatchNow = { saying: SpeedSaying; health: Health; isLive: boolean; lastBlockText: string | null };

const lateAfterS = 2;

/** What Watch says at this moment: speed, direction, health. Nothing of it is said of a rig that is not live. */
export function watchNow(rig: Pick<Rig, 'sensing'>, view: LiveRigView, nowMs: number): WatchNow {
  const live = view.frame?.live ?? null;
  const connected =
    view.connection.status === 'live' || (view.connection.status === 'connecting' && !view.frame);
  const late = secondsSince(live?.lastBlockAt ?? null, view, nowMs);
  const blockLate = late !== null && late > lateAfterS;
  const lastBlockText = live?.lastBlockAt ? clockText(live.lastBlockAt) : null;
  const saying = speedSaying({
    live,
    stale: view.stale,
    lastBlockText,
    blockLate,
    connected,
    sensing: rig.sensing,
  });
  const isLive =
    connected &&
    !view.stale &&
    live !== null &&
    !blockLate &&
    live.state !== 'silent' &&
    live.state !== 'waiting';
  const found = live ? healthOf(live.findings) : null;
  if (live?.setupProblem)
    return { saying, isLive, lastBlockText, health: { status: 'fault', word: 'settings do not run' } };
  const known = found && found.status !== 'good';
  const speaks = live?.state === 'running' || live?.state === 'stopped';
  if (isLive && found && (known || speaks)) return { saying, isLive, lastBlockText, health: found };
  return {
    saying,
    isLive,
    lastBlockText,
    health: known
      ? { ...found, word: `${found.word} before` }
      : { status: 'unknown', word: 'health unknown' },
  };
}

/** "13:52:07" in the reader's zone, 12 or 24 hours as usual there. */
export function clockText(instant: string, to: 'second' | 'minute' = 'second', locale?: string): string {
  return new Date(instant).toLocaleTimeString(locale, { timeStyle: to === 'second' ? 'medium' : 'short' });
}
