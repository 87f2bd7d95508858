import { spawn } from 'node:child_process';
import type { ChildProcess } from 'node:child_process';
import { mkdtempSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:net';
import type { AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import BetterSqlite from 'better-sqlite3';
import { build } from 'esbuild';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';

const root = fileURLToPath(new URL('../..', import.meta.url));
let folder: string;
const running: ChildProcess[] = [];
/** Within the repository, so that the packages are found. */
const built = join(root, 'dist', 'test', `process-${process.pid}`);

beforeAll(async () => {
  await build({
    absWorkingDir: root,
    entryPoints: { main: 'server/main.ts' },
    outdir: built,
    outExtension: { '.js': '.mjs' },
    bundle: true,
    packages: 'external',
    platform: 'node',
    target: 'node20',
    format: 'esm',
    logLevel: 'warning',
  });
});
afterAll(() => rmSync(built, { recursive: true, force: true }));

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'turnmark-'));
});
afterEach(() => {
  for (const child of running.splice(0)) child.kill('SIGKILL');
  rmSync(folder, { recursive: true, force: true });
});

function start(env: Record<string, string> = {}) {
  const child = spawn(process.execPath, [join(built, 'main.mjs')], {
    cwd: root,
    env: { ...process.env, PORT: '0', TURNMARK_DATA_DIR: folder, TURNMARK_DEMO_RIGS: '0', ...env },
  });
  running.push(child);
  let out = '';
  let err = '';
  child.stderr.setEncoding('utf8').on('data', (text: string) => (err += text));
  const ended = new Promise<number | null>((resolve) => child.once('close', (code) => resolve(code)));
  const greeted = new Promise<string>((resolve, reject) => {
    child.stdout.setEncoding('utf8').on('data', (text: string) => {
      out += text;
      if (out.includes('Data folder')) resolve(out);
    });
    child.once('close', () => reject(new Error(`ended before it was up: ${err}`)));
  });
  greeted.catch(() => undefined);
  return { child, ended, greeted, failure: async () => ({ code: await ended, err }) };
}

const passwordIn = (greeting: string) => /password for each: (\S+)/.exec(greeting)?.[1] ?? '';
const urlIn = (greeting: string) => /running: (\S+)/.exec(greeting)?.[1] ?? '';
const signIn = (url: string, password: string) =>
  fetch(`${url}/api/v1/session`, {
    method: 'POST',
    headers: { 'Content-Type': 'application/json' },
    body: JSON.stringify({ email: 'admin@turnmark.example', password }),
  });

describe('the process', () => {
  it('prints sign-ins that work, ends cleanly when told to, and keeps them for the next start', async () => {
    const first = start();
    const greeting = await first.greeted;
    expect((await signIn(urlIn(greeting), passwordIn(greeting))).status).toBe(200);
    expect(statSync(join(folder, 'demo-secrets.json')).mode & 0o777).toBe(0o600);
    first.child.kill('SIGTERM');
    expect(await first.ended).toBe(0);

    const second = start();
    const again = await second.greeted;
    expect(passwordIn(again)).toBe(passwordIn(greeting));
    second.child.kill('SIGINT');
    expect(await second.ended).toBe(0);

    const third = start({ TURNMARK_DEMO_PASSWORD: 'chosen-by-hand' });
    const chosen = await third.greeted;
    expect((await signIn(urlIn(chosen), 'chosen-by-hand')).status).toBe(200);
    expect((await signIn(urlIn(chosen), passwordIn(greeting))).status).toBe(401);
    third.child.kill('SIGTERM');
    await third.ended;
  }, 120_000);

  it('says in one sentence that the port is taken', async () => {
    const other = createServer();
    await new Promise<void>((resolve) => other.listen(0, () => resolve()));
    const { port } = other.address() as AddressInfo;
    const { code, err } = await start({ PORT: String(port) }).failure();
    other.close();
    expect(code).toBe(1);
    expect(err).toBe(`Port ${port} is in use: end the program that uses it, or choose another with PORT.\n`);
  });

  it('says in one sentence that the data folder cannot be written', async () => {
    const file = join(folder, 'a-file');
    writeFileSync(file, '');
    const { code, err } = await start({ TURNMARK_DATA_DIR: join(file, 'data') }).failure();
    expect([code, err]).toEqual([1, `The data folder ${join(file, 'data')} cannot be written.\n`]);
  });

  it('leaves a database of a newer version alone, in one sentence', async () => {
    const newer = new BetterSqlite(join(folder, 'turnmark.db'));
    newer.exec('CREATE TABLE later (x)');
    newer.pragma('application_id = 0x746d646d');
    newer.pragma('user_version = 9999');
    newer.close();
    const { code, err } = await start().failure();
    expect(code).toBe(1);
    expect(err).toMatch(/^turnmark\.db was written by a newer Turnmark.*\.\n$/);
  });

  it('lets one hub run on a data folder', async () => {
    const first = start();
    await first.greeted;
    const { code, err } = await start().failure();
    expect([code, err]).toEqual([1, `Another hub is running on the data folder ${folder}.\n`]);
  });

  it('names what is wrong in the environment', async () => {
    const { code, err } = await start({ TURNMARK_MODE: 'production' }).failure();
    expect(code).toBe(1);
    expect(err).toMatch(/^TURNMARK_SECRET is needed in production: .*\.\n$/);
  });
});
