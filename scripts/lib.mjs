// Helpers of the scripts that must run before anything is installed: Node's own modules only.
import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, readdirSync, statSync, writeFileSync } from 'node:fs';
import { dirname, join, relative } from 'node:path';
import { fileURLToPath } from 'node:url';

export const root = dirname(dirname(fileURLToPath(import.meta.url)));

/** Runs a command; throws with its name when it fails. */
export function run(command, args, options = {}) {
  const done = spawnSync(command, args, { cwd: root, stdio: 'inherit', ...options });
  if (done.error) throw done.error;
  if (done.status !== 0)
    throw new Error(`${command} ${args.join(' ')} ended with ${done.status ?? done.signal}`);
}

export function hashOf(paths) {
  const hash = createHash('sha256');
  const visit = (path) => {
    if (!existsSync(path)) return;
    if (statSync(path).isDirectory()) {
      for (const name of readdirSync(path).sort()) visit(join(path, name));
    } else {
      hash.update(relative(root, path)).update('\0').update(readFileSync(path));
    }
  };
  for (const path of paths) visit(join(root, path));
  return hash.digest('hex');
}

/** Runs `make` unless the inputs and the output are as they were after the last time. */
export function onceFor(name, inputs, output, make) {
  const stampFile = join(root, 'node_modules', '.cache', `turnmark-${name}.sha256`);
  const stamp = hashOf(inputs);
  if (existsSync(join(root, output)) && existsSync(stampFile) && readFileSync(stampFile, 'utf8') === stamp)
    return;
  make();
  mkdirSync(dirname(stampFile), { recursive: true });
  writeFileSync(stampFile, stamp);
}

/** `npm ci`, when node_modules is absent or the lock has changed since. */
export function ensureInstalled() {
  const stampFile = join(root, 'node_modules', '.turnmark-lock.sha256');
  const stamp = hashOf(['package-lock.json']);
  if (existsSync(stampFile) && readFileSync(stampFile, 'utf8') === stamp) return;
  console.log('Installing packages …');
  run('npm', ['ci', '--no-audit', '--no-fund', '--loglevel=error']);
  writeFileSync(stampFile, stamp);
}

export const quietExpo = { CI: '1', EXPO_NO_TELEMETRY: '1', EXPO_OFFLINE: '1', EXPO_NO_DOTENV: '1' };

export function ensureWebBuilt() {
  const inputs = [
    'app',
    'client',
    'signal',
    'server/contract',
    'assets',
    'public',
    'app.json',
    'metro.config.mjs',
    'package-lock.json',
  ];
  onceFor('web', inputs, 'dist/web/index.html', () => {
    console.log('Building the web app …');
    run('npx', ['expo', 'export', '-p', 'web', '--output-dir', 'dist/web'], {
      env: { ...process.env, ...quietExpo, NODE_ENV: 'production' },
      stdio: ['ignore', 'ignore', 'inherit'],
    });
  });
}

export function ensureServerBuilt() {
  const inputs = [
    'server',
    'ingest',
    'signal',
    'db',
    'simulator',
    'scripts/build-server.mjs',
    'package-lock.json',
  ];
  onceFor('server', inputs, 'dist/server/main.mjs', () =>
    run(process.execPath, ['scripts/build-server.mjs']),
  );
}
