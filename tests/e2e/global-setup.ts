/** One hub with its demo rigs for all journeys: the built one, as `npm start` runs it, on a free port. */
import { spawn } from 'node:child_process';
import { randomBytes } from 'node:crypto';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = fileURLToPath(new URL('../../', import.meta.url));

async function freePort(): Promise<number> {
  const { createServer } = await import('node:net');
  return new Promise((resolve, reject) => {
    const probe = createServer().once('error', reject);
    probe.listen(0, '127.0.0.1', () => {
      const address = probe.address();
      probe.close(() => resolve(typeof address === 'object' && address !== null ? address.port : 0));
    });
  });
}

export default async function globalSetup(): Promise<() => Promise<void>> {
  const dataDir = mkdtempSync(join(tmpdir(), 'turnmark-e2e-'));
  const port = await freePort();
  const password = randomBytes(12).toString('base64url');
  const hub = spawn(process.execPath, ['dist/server/main.mjs'], {
    cwd: root,
    env: {
      ...process.env,
      PORT: String(port),
      TURNMARK_DATA_DIR: dataDir,
      TURNMARK_DEMO_PASSWORD: password,
      TURNMARK_LOG_LEVEL: 'warn',
    },
    stdio: ['ignore', 'ignore', 'inherit'],
  });
  const baseUrl = `http://127.0.0.1:${port}`;
  const deadlineMs = Date.now() + 60_000;
  for (;;) {
    if (hub.exitCode !== null) throw new Error(`the hub ended with ${hub.exitCode} before it was ready`);
    const ready = await fetch(`${baseUrl}/readyz`)
      .then((r) => r.ok)
      .catch(() => false);
    if (ready) break;
    if (Date.now() > deadlineMs) throw new Error('the hub was not ready within a minute');
    await new Promise((resolve) => setTimeout(resolve, 200));
  }
  process.env.TURNMARK_E2E_URL = baseUrl;
  process.env.TURNMARK_E2E_PASSWORD = password;
  return async () => {
    const ended = new Promise((resolve) => hub.once('exit', resolve));
    hub.kill('SIGTERM');
    await ended;
    rmSync(dataDir, { recursive: true, force: true });
  };
}
