/** A hub on a free port with its databases in memory, and a script's way to talk to it. */
import { configFrom } from '@/server/config/config';
import type { TurnmarkServer } from '@/server/create-server';
import { createServer } from '@/server/create-server';

export type HubUnderTest = {
  url: string;
  server: TurnmarkServer;
  /** A call of the API as the engineer (or another); throws with the problem's text where it is refused. */
  api<T = unknown>(method: string, path: string, body?: unknown, who?: Who): Promise<T>;
  token(who: Who): Promise<string>;
  close(): Promise<void>;
};
export type Who = 'admin' | 'engineer' | 'reviewer';

export const demoPassword = 'a-long-demo-password';

export async function startHub(env: Record<string, string> = {}): Promise<HubUnderTest> {
  const config = configFrom({
    PORT: '0',
    TURNMARK_DEMO_RIGS: '0',
    TURNMARK_DEMO_PASSWORD: demoPassword,
    TURNMARK_LOG_LEVEL: 'fatal',
    ...env,
  } as never);
  const server = await createServer({ ...config, dataDir: env.TURNMARK_DATA_DIR ?? ':memory:' });
  const tokens = new Map<Who, string>();
  const url = server.url;

  async function token(who: Who): Promise<string> {
    const known = tokens.get(who);
    if (known !== undefined) return known;
    const answer = await fetch(`${url}/api/v1/session`, {
      method: 'POST',
      headers: { 'content-type': 'application/json' },
      body: JSON.stringify({ email: `${who}@turnmark.example`, password: demoPassword }),
    });
    const { accessToken } = (await answer.json()) as { accessToken: string };
    tokens.set(who, accessToken);
    return accessToken;
  }

  return {
    url,
    server,
    token,
    async api<T>(method: string, path: string, body?: unknown, who: Who = 'engineer'): Promise<T> {
      const response = await fetch(`${url}/api/v1${path}`, {
        method,
        headers: { authorization: `Bearer ${await token(who)}`, 'content-type': 'application/json' },
        ...(body === undefined ? {} : { body: JSON.stringify(body) }),
      });
      if (!response.ok) throw new Error(`${method} ${path}: ${response.status} ${await response.text()}`);
      return (response.status === 204 ? undefined : await response.json()) as T;
    },
    close: () => server.close(),
  };
}
