/** What has run out is dropped now and then: ended sign-ins, remembered answers. */
import { pruneResponses, pruneSessions } from '@/db';
import type { TurnmarkDb } from '@/db';
import type { Clock } from './clock';
import type { Logger } from './logger';

const everyMs = 3_600_000;

export function startHousekeeping({
  db,
  clock,
  log,
}: {
  db: TurnmarkDb;
  clock: Clock;
  log: Logger;
}): () => void {
  const sweep = async () => {
    try {
      const sessions = await pruneSessions(db, clock.nowMs());
      const responses = await pruneResponses(db, clock.nowMs());
      if (sessions + responses > 0) log.info({ sessions, responses }, 'dropped what had run out');
    } catch (error) {
      log.warn({ err: error }, 'could not drop what had run out');
    }
  };
  const timer = setInterval(() => void sweep(), everyMs);
  timer.unref();
  return () => clearInterval(timer);
}
