/** A whole hub on a free port with databases in memory, and people who use it over real HTTP. */
import { Writable } from 'node:stream';
import { configFrom } from '@/server/config/config';
import type { ServerConfig } from '@/server/config/config';
import type { Overrides } from '@/server/context';
import type { Role, Session } from '@/server/contract';
import { createServer } from '@/server/create-server';

export const password = 'blue-steel-scribe';
export const roles: Role[] = ['reviewer', 'engineer', 'admin'];

export type Answer<T = unknown> = { status: number; headers: Headers; body: T };
export type Ask = <T = Record<string, unknown>>(
  method: string,
  path: string,
  body?: unknown,
  headers?: Record<string, string>,
) => Promise<Answer<T>>;

/** A clock that a test moves. */
export function movableClock(startMs = Date.UTC(2026, 3, 1)) {
  let nowMs = startMs;
  return { nowMs: () => nowMs, move: (byMs: number) => void (nowMs += byMs) };
}

export async function startHub(overrides: Overrides = {}, changes: Partial<ServerConfig> = {}) {
  const lines: string[] = [];
  const logDestination = new Writable({
    write(chunk: Buffer, _encoding, done) {
      lines.push(chunk.toString());
      done();
    },
  });
  const config = configFrom({ PORT: '0', TURNMARK_DEMO_RIGS: '0', TURNMARK_DEMO_PASSWORD: password });
  const server = await createServer(
    { ...config, dataDir: ':memory:', logLevel: 'trace', ...changes },
    { logDestination, ...overrides },
  );

  function asking(token?: string): Ask {
    return async <T>(method: string, path: string, body?: unknown, headers: Record<string, string> = {}) => {
      const response = await fetch(`${server.url}${path}`, {
        method,
        headers: {
          ...(token === undefined ? {} : { Authorization: `Bearer ${token}` }),
          ...(body === undefined ? {} : { 'Content-Type': 'application/json' }),
          ...headers,
        },
        ...(body === undefined ? {} : { body: typeof body === 'string' ? body : JSON.stringify(body) }),
      });
      const text = await response.text();
      const json = /json/.test(response.headers.get('content-type') ?? '');
      return {
        status: response.status,
        headers: response.headers,
        body: (json ? JSON.parse(text) : text) as T,
      };
    };
  }

  const anyone = asking();
  return {
    ...server,
    /** What was logged so far. */
    logged: () => lines.join(''),
    anyone,
    asking,
    async signIn(role: Role) {
      const email = `${role}@turnmark.example`;
      const { body, headers } = await anyone<Session>('POST', '/api/v1/session', { email, password });
      const cookie = (headers.get('set-cookie') ?? '').split(';')[0] ?? '';
      return { ask: asking(body.accessToken), token: body.accessToken, cookie, user: body.user };
    },
  };
}

export type TestHub = Awaited<ReturnType<typeof startHub>>;

export const plainRig = {
  name: 'Bench fan',
  sensing: 'single',
  wheel: { pulsesPerTurn: 24 },
  channels: [{ name: 'A', role: 'A', voltsPerCode: 0.001, minCode: 0, maxCode: 4095 }],
};
