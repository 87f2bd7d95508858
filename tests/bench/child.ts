/** Child processes of the benchmark, each started from here and ended by its own id. */
import { spawn, type ChildProcess } from 'node:child_process';
import { once } from 'node:events';
import { fileURLToPath } from 'node:url';

export const root = fileURLToPath(new URL('../..', import.meta.url));

/** Runs a program to its end and reads the JSON that it prints last. Rejects with what it said otherwise. */
export async function runForJson<T>(file: string, args: string[], input?: string): Promise<T> {
  const child = spawn(file, args, { cwd: root, stdio: ['pipe', 'pipe', 'pipe'] });
  let out = '';
  let said = '';
  child.stdout.setEncoding('utf8').on('data', (text: string) => (out += text));
  child.stderr.setEncoding('utf8').on('data', (text: string) => (said += text));
  child.stdin.end(input ?? '');
  const [code] = (await once(child, 'close')) as [number | null];
  const last = out.trim().split('\n').at(-1) ?? '';
  if (code !== 0 || last === '')
    throw new Error(`${file} ${args[0] ?? ''} ended with ${code}: ${said.slice(-2000)}`);
  return JSON.parse(last) as T;
}

export function runTypeScript<T>(path: string, args: string[], input?: string): Promise<T> {
  return runForJson<T>(process.execPath, ['--import', 'tsx', path, ...args], input);
}

export type Probe = { cpuUs: number; rssMb: number; heapMb: number; worstBlockMs: number };
export type ProbedProcess = {
  child: ChildProcess;
  /** What was printed so far. */
  output(): string;
  /** CPU time since the start; the longest block of the event loop since the probe before. */
  probe(): Promise<Probe>;
  stop(): Promise<void>;
};

/** Starts a Node program with the probe in it and waits until it has printed `ready`. */
export async function startProbed(
  args: string[],
  env: NodeJS.ProcessEnv,
  isReady: (output: string) => boolean,
): Promise<ProbedProcess> {
  const child = spawn(process.execPath, ['--import', './tests/bench/probe.mjs', ...args], {
    cwd: root,
    env: { ...process.env, ...env },
    stdio: ['ignore', 'pipe', 'pipe', 'ipc'],
  });
  let text = '';
  const hear = (part: Buffer) => (text = (text + part.toString()).slice(-65_536));
  child.stdout?.on('data', hear);
  child.stderr?.on('data', hear);
  const closed = once(child, 'close');
  await new Promise<void>((resolve, reject) => {
    const look = () => (isReady(text) ? resolve() : undefined);
    child.stdout?.on('data', look);
    child.stderr?.on('data', look);
    child.once('close', (code) =>
      reject(new Error(`ended with ${code} before it was ready: ${text.slice(-2000)}`)),
    );
  });
  let isStopping = false;
  child.once('close', (code, signal) => {
    if (!isStopping)
      process.stderr.write(`${args.at(-1)} ended by itself (${code ?? signal}): ${text.slice(-2000)}\n`);
  });
  return {
    child,
    output: () => text,
    async probe() {
      child.send('probe');
      const [answer] = (await once(child, 'message')) as [Probe];
      return answer;
    },
    async stop() {
      isStopping = true;
      child.kill('SIGTERM');
      const force = setTimeout(() => child.kill('SIGKILL'), 8000);
      await closed;
      clearTimeout(force);
    },
  };
}
