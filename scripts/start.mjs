// `npm start`: installs, builds what changed, then runs the hub with its demo rigs until stopped.
import { spawn } from 'node:child_process';
import { ensureInstalled, ensureServerBuilt, ensureWebBuilt, root } from './lib.mjs';

try {
  ensureInstalled();
  ensureServerBuilt();
  ensureWebBuilt();
} catch (error) {
  console.error(`Turnmark could not be built: ${error.message}`);
  process.exit(1);
}
const hub = spawn(process.execPath, ['--enable-source-maps', 'dist/server/main.mjs'], {
  cwd: root,
  stdio: 'inherit',
});
for (const signal of ['SIGINT', 'SIGTERM']) process.on(signal, () => hub.kill(signal));
hub.on('exit', (code) => process.exit(code ?? 1));
