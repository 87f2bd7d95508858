/** `npm run simulate -- --help` */
import { readFileSync } from 'node:fs';
import { parseArgs } from 'node:util';
import { findDemoRig, listRigs, withFault } from '@/simulator/cli-rigs';
import { cliHelp } from '@/simulator/cli-help';
import { writeRecording } from '@/simulator/recording';
import { createRig } from '@/simulator/rig-model';
import type { SenderEvent } from '@/simulator/sender';
import { streamRig } from '@/simulator/stream';

class UsageError extends Error {
  override name = 'UsageError';
}

function readOptions(args: string[]) {
  const { values } = parseArgs({
    args,
    options: {
      help: { type: 'boolean', short: 'h' },
      list: { type: 'boolean' },
      rig: { type: 'string' },
      url: { type: 'string', default: 'http://127.0.0.1:4680' },
      'key-file': { type: 'string' },
      format: { type: 'string', default: 'cbor' },
      transport: { type: 'string', default: 'ws' },
      seed: { type: 'string', default: '1' },
      speed: { type: 'string', default: '1' },
      seconds: { type: 'string' },
      from: { type: 'string', default: '0' },
      block: { type: 'string', default: '40' },
      fault: { type: 'string', multiple: true, default: [] },
      csv: { type: 'string' },
      quiet: { type: 'boolean' },
    },
  });
  return values;
}

async function main(args: string[]): Promise<void> {
  const options = readOptions(args);
  if (options.help) return print(cliHelp);
  if (options.list) return print(listRigs());
  if (options.rig === undefined) throw new UsageError('--rig is missing; --list shows the rigs');
  const demo = findDemoRig(options.rig);
  if (!demo) throw new UsageError(`there is no rig "${options.rig}"; --list shows the rigs`);
  const spec = options.fault.reduce(withFault, demo.spec);
  const rig = createRig(spec, positive('seed', options.seed, true));
  const seconds = options.seconds === undefined ? undefined : positive('seconds', options.seconds);

  if (options.csv !== undefined) {
    const fromS = positive('from', options.from, true);
    const written = await writeRecording(rig, options.csv, { fromS, seconds: seconds ?? 10 });
    return print(`wrote ${written.rows} rows to ${options.csv} and the truth to ${written.truthPath}`);
  }

  const stream = streamRig({
    rig,
    baseUrl: originOf(options.url),
    key: readKey(options['key-file']),
    format: oneOf('format', options.format, ['cbor', 'json'] as const),
    transport: oneOf('transport', options.transport, ['http', 'ws'] as const),
    speed: positive('speed', options.speed),
    blockS: positive('block', options.block) / 1000,
    seconds,
    onEvent: (event) => {
      if (!options.quiet || event.kind === 'ended') note(event);
    },
  });
  const stop = () => void stream.stop();
  process.once('SIGINT', stop);
  process.once('SIGTERM', stop);
  const stats = await stream.done;
  const unsent = stats.dropped + stats.skipped;
  print(`${demo.name}: ${stats.blocks} blocks of ${stats.samples} samples a channel made`);
  print(`${stats.unacked} without an ack, ${unsent} not sent`);
  if (stats.endedBecause !== undefined || stats.unacked > 0) process.exitCode = 1;
}

/** From TURNMARK_RIG_KEY, else a file, `-` for standard input. Never from the command line, where others can read it. */
function readKey(path: string | undefined): string {
  const key =
    path === undefined ? process.env.TURNMARK_RIG_KEY : readFileSync(path === '-' ? 0 : path, 'utf8');
  if (!key?.trim())
    throw new UsageError('no rig key: set TURNMARK_RIG_KEY, or give --key-file FILE (- for standard input)');
  return key.trim();
}

function originOf(text: string): string {
  const url = URL.canParse(text) ? new URL(text) : undefined;
  if (!url || !/^https?:$/.test(url.protocol))
    throw new UsageError(`--url: "${text}" is no http or https address`);
  return url.origin;
}

function positive(name: string, text: string, allowZero = false): number {
  const value = Number(text);
  if (text.trim() !== '' && Number.isFinite(value) && (value > 0 || (allowZero && value === 0))) return value;
  throw new UsageError(`--${name}: "${text}" is no number ${allowZero ? 'from 0 up' : 'above 0'}`);
}

function oneOf<T extends string>(name: string, text: string, allowed: readonly T[]): T {
  const found = allowed.find((value) => value === text);
  if (found === undefined) throw new UsageError(`--${name}: "${text}" is none of ${allowed.join(', ')}`);
  return found;
}

function note(event: SenderEvent): void {
  if (event.kind === 'connected') process.stderr.write('connected\n');
  if (event.kind === 'refused') process.stderr.write(`refused: ${event.detail}\n`);
  if (event.kind === 'ended') process.stderr.write(`${event.reason}\n`);
  if (event.kind === 'retry') {
    process.stderr.write(`${event.reason}; trying again in ${(event.afterMs / 1000).toFixed(1)} s\n`);
  }
}

function print(text: string): void {
  process.stdout.write(`${text}\n`);
}

main(process.argv.slice(2)).catch((error: unknown) => {
  process.stderr.write(`${error instanceof Error ? error.message : String(error)}\n`);
  process.exitCode = 2;
});
