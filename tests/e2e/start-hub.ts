/** The built hub as `npm start` runs it, on a free port with a data folder of its own. */
import { spawn } from 'node:child_process';
import type { ChildProcess } from 'node:child_process';
import { randomBytes } from 'node:crypto';
import { mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = fileURLToPath(new URL('../../', import.meta.url));

export type Hub = {
  url: string;
  password: string;
  /** Ends the process; its data stay. */
  stop(): Promise<void>;
  /** Again on the same port with the same data. */
  start(): Promise<void>;
  /** Ends the process and takes its data away. */
  remove(): Promise<void>;
};

async function freePort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const probe = createServer().once('error', reject);
    probe.listen(0, '127.0.0.1', () => {
      const address = probe.address();
      probe.close(() => resolve(typeof address === 'object' && address !== null ? address.port : 0));
    });
  });
}

export async function startHub(env: Record<string, string> = {}): Promise<Hub> {
  const dataDir = mkdtempSync(join(tmpdir(), 'turnmark-e2e-'));
  const port = await freePort();
  const password = randomBytes(12).toString('base64url');
  const url = `http://127.0.0.1:${port}`;
  let process_: ChildProcess | null = null;
  const hub: Hub = {
    url,
    password,
    start: async () => {
      const started = spawn(process.execPath, ['dist/server/main.mjs'], {
        cwd: root,
        env: {
          ...process.env,
          PORT: String(port),
          TURNMARK_DATA_DIR: dataDir,
          TURNMARK_DEMO_PASSWORD: password,
          TURNMARK_LOG_LEVEL: 'warn',
          ...env,
        },
        stdio: ['ignore', 'ignore', 'inherit'],
      });
      process_ = started;
      await untilReady(url, started);
    },
    stop: async () => {
      const running = process_;
      process_ = null;
      if (running === null || running.exitCode !== null) return;
      const ended = new Promise((resolve) => running.once('exit', resolve));
      running.kill('SIGTERM');
      await ended;
    },
    remove: async () => {
      await hub.stop();
      rmSync(dataDir, { recursive: true, force: true });
    },
  };
  await hub.start();
  return hub;
}

async function untilReady(url: string, hub: ChildProcess): Promise<void> {
  const deadlineMs = Date.now() + 60_000;
  for (;;) {
    if (hub.exitCode !== null) throw new Error(`the hub ended with ${hub.exitCode} before it was ready`);
    const ready = await fetch(`${url}/readyz`)
      .then((r) => r.ok)
      .catch(() => false);
    if (ready) return;
    if (Date.now() > deadlineMs) throw new Error('the hub was not ready within a minute');
    await new Promise((resolve) => setTimeout(resolve, 200));
  }
}
