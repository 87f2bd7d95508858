/** A hub of its own for the benchmark: as it is shipped, in a fresh data folder, used through the public API only. */
import { mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { runForJson, startProbed, type ProbedProcess } from '@/tests/bench/child';

export type HubUnderTest = {
  process: ProbedProcess;
  origin: string;
  accessToken: string;
  /** Makes rigs of the given channels (A, B) and rate, each with a key. */
  makeRigs(count: number, channels: string[]): Promise<{ rigId: string; key: string }[]>;
  live(rigId: string): Promise<{ turns: number | null; findings: { code: string }[] }>;
  stop(): Promise<void>;
};

const password = 'bench-only-password';

export async function startHub(): Promise<HubUnderTest> {
  await runForJson('sh', ['-c', 'node scripts/build-server.mjs && echo {}']);
  const dataDir = mkdtempSync(join(tmpdir(), 'turnmark-bench-hub-'));
  const port = await freePort();
  const origin = `http://127.0.0.1:${port}`;
  const hub = await startProbed(
    ['dist/server/main.mjs'],
    {
      PORT: String(port),
      TURNMARK_DATA_DIR: dataDir,
      TURNMARK_DEMO_RIGS: '0',
      TURNMARK_DEMO_PASSWORD: password,
      TURNMARK_LOG_LEVEL: 'warn',
    },
    (output) => output.includes('is running'),
  ).catch((error: unknown) => {
    rmSync(dataDir, { recursive: true, force: true });
    throw error;
  });
  const session = await call<{ accessToken: string }>(origin, undefined, 'POST', '/session', {
    email: 'admin@turnmark.example',
    password,
  });
  const token = session.accessToken;
  return {
    process: hub,
    origin,
    accessToken: token,
    async makeRigs(count, channels) {
      const made: { rigId: string; key: string }[] = [];
      for (let i = 0; i < count; i += 1) {
        const { id } = await call<{ id: string }>(
          origin,
          token,
          'POST',
          '/rigs',
          rigBody(`Bench ${i + 1}`, channels),
        );
        await call(origin, token, 'POST', `/rigs/${id}/settings`, settingsBody);
        const { key } = await call<{ key: string }>(origin, token, 'POST', `/rigs/${id}/keys`, {
          name: 'bench',
        });
        made.push({ rigId: id, key });
      }
      return made;
    },
    live: (rigId) => call(origin, token, 'GET', `/rigs/${rigId}/live`),
    async stop() {
      await hub.stop();
      rmSync(dataDir, { recursive: true, force: true });
    },
  };
}

async function call<T>(
  origin: string,
  token: string | undefined,
  method: string,
  path: string,
  body?: unknown,
): Promise<T> {
  const reply = await fetch(`${origin}/api/v1${path}`, {
    method,
    headers: {
      ...(body === undefined ? {} : { 'Content-Type': 'application/json' }),
      ...(token === undefined ? {} : { Authorization: `Bearer ${token}` }),
    },
    ...(body === undefined ? {} : { body: JSON.stringify(body) }),
  });
  const text = await reply.text();
  if (!reply.ok) throw new Error(`${method} ${path}: ${reply.status} ${text}`);
  return JSON.parse(text) as T;
}

function rigBody(name: string, channels: string[]) {
  return {
    name,
    sensing: 'quadrature',
    wheel: { pulsesPerTurn: 24 },
    channels: channels.map((channel) => ({
      name: channel,
      role: channel,
      voltsPerCode: 3.3 / 4096,
      minCode: 0,
      maxCode: 4095,
      sensor: { kind: 'linear' },
    })),
  };
}

const settingsBody = {
  reason: 'Benchmark',
  filter: { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 2000 },
  band: { mode: 'fitted', operateFraction: 0.6, releaseFraction: 0.4 },
  holdoffS: 0,
  speed: { method: 'tooth', windowS: 0.1, stoppedAfterS: 2 },
};

function freePort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', reject);
    probe.listen(0, '127.0.0.1', () => {
      const address = probe.address();
      probe.close(() => resolve(typeof address === 'object' && address ? address.port : 0));
    });
  });
}
