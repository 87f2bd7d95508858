/** The demo rigs run as a process of their own and stream through the public ingest URL, as a board would. */
import { execFile, spawn } from 'node:child_process';
import type { ChildProcess } from 'node:child_process';

import { existsSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { promisify } from 'node:util';
import { z } from 'zod';
import { rigInput, settingsInput } from '@/server/contract';
import type { Logger } from '@/server/logger';

const restartAfterMs = 2_000;
const endWithinMs = 3_000;

export const demoRig = z.object({ name: z.string(), rig: rigInput, settings: settingsInput });
export type DemoRig = z.output<typeof demoRig>;

/** What starts the demo rigs: the bundle beside this file, or the source through tsx. */
export type DemoCommand = { file: string; args: string[] };

export function demoCommand(): DemoCommand {
  const bundled = fileURLToPath(new URL('./demo-rigs.mjs', import.meta.url));
  if (existsSync(bundled)) return { file: process.execPath, args: [bundled] };
  const source = fileURLToPath(new URL('../../simulator/demo-main.ts', import.meta.url));
  return { file: process.execPath, args: ['--import', 'tsx', source] };
}

/** Asks the demo rigs what they are: the setup and settings that a person would have typed. */
export async function describeDemoRigs(command: DemoCommand): Promise<DemoRig[]> {
  const { stdout } = await promisify(execFile)(command.file, [...command.args, '--describe'], {
    timeout: 30_000,
  });
  return z.array(demoRig).parse(JSON.parse(stdout));
}

export type DemoOrder = { baseUrl: string; rigs: { name: string; key: string }[] };

/** Starts them, and again when they die. The keys go by standard input: an argument could be read by anyone. */
export function runDemoRigs(command: DemoCommand, order: DemoOrder, log: Logger): { stop(): Promise<void> } {
  let child: ChildProcess | undefined;
  let again: NodeJS.Timeout | undefined;
  let stopping = false;

  const start = () => {
    child = spawn(command.file, command.args, { stdio: ['pipe', 'ignore', 'pipe'] });
    child.stdin?.on('error', (error) => log.warn({ err: error }, 'demo rigs did not take their order'));
    child.stdin?.end(JSON.stringify(order));
    child.stderr
      ?.setEncoding('utf8')
      .on('data', (text: string) => log.info({ said: text.trim() }, 'demo rigs'));
    child.on('error', (error) => log.error({ err: error }, 'demo rigs could not be started'));
    child.on('close', (code, signal) => {
      child = undefined;
      if (stopping) return;
      log.warn({ code, signal }, 'demo rigs ended; starting them again');
      again = setTimeout(start, restartAfterMs);
    });
  };
  start();

  return {
    async stop() {
      stopping = true;
      clearTimeout(again);
      const running = child;
      if (running === undefined) return;
      const ended = new Promise<void>((resolve) => running.once('close', () => resolve()));
      running.kill('SIGTERM');
      const force = setTimeout(() => running.kill('SIGKILL'), endWithinMs);
      await ended;
      clearTimeout(force);
    },
  };
}
