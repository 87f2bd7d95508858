// Runs a TypeScript entry with the repository's own tsx: `node scripts/run.mjs FILE ARGS…`.
import { spawn } from 'node:child_process';
import { root, ensureInstalled } from './lib.mjs';

ensureInstalled();
const [file, ...args] = process.argv.slice(2);
const child = spawn(process.execPath, ['--import', 'tsx', file, ...args], { cwd: root, stdio: 'inherit' });
for (const signal of ['SIGINT', 'SIGTERM']) process.on(signal, () => child.kill(signal));
child.on('exit', (code, signal) => {
  process.exitCode = code ?? (signal === 'SIGINT' ? 130 : 1);
});
