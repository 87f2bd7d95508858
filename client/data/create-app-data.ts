import { Access } from '@/client/data/access';
import { Api } from '@/client/data/api';
import type { AppData } from '@/client/data/app-data-context';
import type { Clock } from '@/client/data/clock';
import type { Fetch } from '@/client/data/http';
import { LiveStore } from '@/client/data/live-store';
import { createQueryClient } from '@/client/data/query-client';
import { SessionStore } from '@/client/data/session';
import type { OpenSocket } from '@/client/data/socket';

export type Surroundings = {
  fetch: Fetch;
  clock: Clock;
  openSocket: OpenSocket;
  random: () => number;
  schedule: (run: () => void) => void;
};

/** Everything that holds data, wired together once. */
export function createAppData(around: Surroundings): AppData {
  const access = new Access(around.fetch, around.clock);
  const api = new Api(around.fetch, access);
  const session = new SessionStore({ fetch: around.fetch, access, api });
  const queries = createQueryClient();
  const live = new LiveStore({
    open: around.openSocket,
    clock: around.clock,
    random: around.random,
    schedule: around.schedule,
    token: async (fresh) => (fresh ? null : access.token) ?? (await access.refresh()).accessToken,
  });
  access.listen({ renewed: () => live.tokenRenewed(), ended: () => undefined });
  session.subscribe(() => {
    if (session.getSnapshot().status !== 'signed-out') return;
    // The next one to sign in may be someone else.
    live.signedOut();
    queries.clear();
  });
  return { api, session, live, queries };
}
