/** Everything that the parts of the server share, built once, in the order of what needs what. */
import { randomUUID } from 'node:crypto';
import type { IncomingMessage } from 'node:http';
import type { DestinationStream } from 'pino';
import { allRigs, createCaptureStore, firstPage, listKeys, openDatabases, touchKey } from '@/db';
import type { TurnmarkDb } from '@/db';
import { createHttpIngest } from '@/ingest/transports/http';
import { createAudit } from './audit';
import { defaultAttemptLimits } from './auth/attempt-limits';
import type { AttemptLimits } from './auth/attempt-limits';
import { createAuthenticate, createReadToken } from './auth/authenticate';
import { createPasswords } from './auth/passwords';
import { createRefreshCookie } from './auth/refresh-cookie';
import { RigKeys } from './auth/rig-keys';
import type { VerifiedKey } from './auth/rig-keys';
import { Sessions } from './auth/sessions';
import { CaptureAnalyses } from './captures/analyses';
import { systemClock } from './clock';
import type { Clock } from './clock';
import type { ServerConfig } from './config/config';
import { secretsFor } from './config/secrets';
import { Disposers } from './disposers';
import { createOriginCheck } from './http/origin';
import { postedStreamPrefix } from './hub/board-restarts';
import { createHub } from './hub/hub';
import { startHousekeeping } from './housekeeping';
import { createIdempotencyStore } from './idempotency-store';
import { Viewers } from './live/viewers';
import { createLogger } from './logger';
import { createMetrics } from './metrics';
import { allHubRigs } from './rigs';
import { createBoards } from './routes/ingest';

export type Overrides = {
  clock?: Clock;
  logDestination?: DestinationStream;
  attemptLimits?: AttemptLimits;
  /** Folder of the exported web app. */
  webDir?: string;
};

export type AppContext = Awaited<ReturnType<typeof createContext>>;

const refusalAuditEveryMs = 60_000;

async function goodKeys(db: TurnmarkDb): Promise<{ rigId: string; keyId: string }[]> {
  const good: { rigId: string; keyId: string }[] = [];
  for (const { id: rigId } of await allRigs(db)) {
    for (let query = firstPage; ;) {
      const { items } = await listKeys(db, rigId, query);
      good.push(...items.map((key) => ({ rigId, keyId: key.id })));
      const last = items.at(-1);
      if (items.length < query.limit || last === undefined) break;
      query = { ...query, cursor: { key: Date.parse(last.createdAt), id: last.id } };
    }
  }
  return good;
}

export async function createContext(config: ServerConfig, overrides: Overrides) {
  const clock = overrides.clock ?? systemClock;
  const nowMs = () => clock.nowMs();
  const log = createLogger(config.logLevel, overrides.logDestination);
  const disposers = new Disposers((name, err) => log.error({ err, name }, 'could not be ended'));
  const metrics = createMetrics();
  disposers.add('metrics', () => metrics.registry.clear());

  const { db, spool, close } = openDatabases({ dataDir: config.dataDir, durability: config.durability });
  disposers.add('databases', close);
  try {
    const secrets = secretsFor(config);
    disposers.add('housekeeping', startHousekeeping({ db, clock, log }));
    const audit = createAudit({ db, clock, log });
    const hub = createHub({ spool, rigs: await allHubRigs(db), lookbackS: config.lookbackS, nowMs, log });
    disposers.add('hub', () => hub.close());

    const keys = new RigKeys({
      secret: secrets.ingest,
      clock,
      good: await goodKeys(db),
      onUsed: (keyId, atMs) =>
        void touchKey(db, keyId, atMs).catch((err: unknown) =>
          log.warn({ err }, 'last use of a key not written'),
        ),
    });

    const readToken = createReadToken({ secret: secrets.session, clock, db });
    const viewers = new Viewers({
      feed: hub,
      nowMs,
      verify: async (accessToken) => {
        const person = await readToken(accessToken);
        if (person === undefined) return null;
        const { id: personId, familyId, role, expiresAtMs } = person;
        return { personId, familyId, role, expiresAtMs };
      },
    });
    disposers.add('viewers', () => viewers.close());
    const boards = createBoards(hub);
    disposers.add('boards', () => boards.stop());

    const passwords = createPasswords();
    const sessions = new Sessions({ db, secret: secrets.session, clock, passwords, live: viewers });
    const authenticate = createAuthenticate(readToken, async ({ person, method, path, address }) => {
      metrics.refusals.inc({ why: 'forbidden' });
      await audit.forbidden({ id: person.id, name: person.name }, method, path, address);
    });

    const refusedKeys = new Map<string, number>();
    const verifyRigKey = (token: string | undefined, req: IncomingMessage): VerifiedKey => {
      const key = keys.verify(token);
      if (key.ok) return key;
      metrics.refusals.inc({ why: key.slug });
      // A board that does not give up would fill the trail: one row a minute for each key.
      if (
        key.slug === 'key-revoked' &&
        nowMs() - (refusedKeys.get(key.keyId) ?? -Infinity) >= refusalAuditEveryMs
      ) {
        refusedKeys.set(key.keyId, nowMs());
        void audit.keyRefused(key.rigId, key.keyId, req.socket.remoteAddress);
      }
      return key;
    };

    const httpIngest = createHttpIngest({
      sink: hub,
      idempotency: createIdempotencyStore(db, clock),
      nowMs,
      newStreamName: () => `${postedStreamPrefix}${randomUUID()}`,
      pause: () => new Promise((resolve) => setImmediate(resolve)),
    });

    const store = createCaptureStore(db);
    return {
      config,
      secrets,
      clock,
      log,
      metrics,
      disposers,
      db,
      spool,
      store,
      analyses: new CaptureAnalyses({ db, store, log }),
      audit,
      hub,
      keys,
      readToken,
      authenticate,
      passwords,
      sessions,
      viewers,
      boards,
      verifyRigKey,
      httpIngest,
      origin: createOriginCheck(config),
      cookie: createRefreshCookie(config),
      attemptLimits: overrides.attemptLimits ?? defaultAttemptLimits,
    };
  } catch (error) {
    await disposers.dispose();
    throw error;
  }
}
