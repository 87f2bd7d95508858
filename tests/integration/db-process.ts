import { spawn } from 'node:child_process';
import { rmSync } from 'node:fs';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';
import { build } from 'esbuild';
import { onTestFinished } from 'vitest';

export type ChildEnd = { lines: string[]; code: number | null; signal: string | null; errors: string };
export type Child = (
  args: readonly string[],
  until: (line: string, count: number) => boolean,
  limitKib?: number,
) => Promise<ChildEnd>;

/**
 * Bundles a TypeScript file of this folder for the test that calls, so that it starts fast, and gives back what runs it and reports what it
 * said. `until` is asked after each line; true kills the process (SIGKILL) that instant, in the midst of what it does
 * next. `limitKib` caps the size of any file it writes, which fails its writes as a broken disk does.
 */
export async function prepareChild(file: string): Promise<Child> {
  const script = fileURLToPath(new URL(`../../dist/test/${process.pid}-${file}.mjs`, import.meta.url));
  onTestFinished(() => rmSync(script, { force: true }));
  await build({
    entryPoints: [fileURLToPath(new URL(`${file}.ts`, import.meta.url))],
    outfile: script,
    bundle: true,
    packages: 'external',
    platform: 'node',
    format: 'esm',
    logLevel: 'error',
  });
  return async (args, until, limitKib) => {
    const limit = limitKib === undefined ? 'exec "$@"' : `ulimit -f ${limitKib}; exec "$@"`;
    const child = spawn('bash', ['-c', limit, 'bash', process.execPath, script, ...args], {
      stdio: ['ignore', 'pipe', 'pipe'],
    });
    const lines: string[] = [];
    let errors = '';
    child.stderr.on('data', (text: Buffer) => (errors += text.toString()));
    const closed = new Promise<[number | null, string | null]>((resolve) => {
      child.on('close', (code, signal) => resolve([code, signal]));
    });
    for await (const line of createInterface({ input: child.stdout })) {
      lines.push(line);
      if (until(line, lines.length)) child.kill('SIGKILL');
    }
    const [code, signal] = await closed;
    return { lines, code, signal, errors };
  };
}
