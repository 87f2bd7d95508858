/** Times the passes of one variant over the codes in the file that the command line names, and prints JSON. */
import { readFileSync } from 'node:fs';
import { signalCase } from '@/tests/bench/signal-data';

/** After one pass that is not counted; so many that compiling is over, and the fastest is what all would be on a quiet machine. */
export const timedPasses = 14;

export type PassResult = { edges: number; speedSum: number };

export function readCodes(): Int16Array {
  const bytes = readFileSync(process.argv[2] ?? '');
  return new Int16Array(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.length));
}

/** As blocks come from a board; they are made before the clock runs, since whoever decodes them makes them. */
export function inBlocks(codes: Int16Array): Int16Array[] {
  const blocks: Int16Array[] = [];
  for (let at = 0; at < codes.length; at += signalCase.block)
    blocks.push(codes.subarray(at, at + signalCase.block));
  return blocks;
}

/** The second channel of a quadrature pair: the same signal a quarter of a tooth later. */
export function quarterLater(codes: Int16Array): Int16Array {
  const late = new Int16Array(codes.length);
  const quarter = signalCase.rateHz / signalCase.toneHz / 4;
  late.fill(codes[0] ?? 0, 0, quarter);
  late.set(codes.subarray(0, codes.length - quarter), quarter);
  return late;
}

/** @param samples instants of one pass. */
export function timePasses(samples: number, pass: () => PassResult): void {
  let result = pass();
  let nsPerSample = Infinity;
  for (let i = 0; i < timedPasses; i += 1) {
    const before = process.cpuUsage();
    result = pass();
    const spent = process.cpuUsage(before);
    nsPerSample = Math.min(nsPerSample, ((spent.user + spent.system) * 1000) / samples);
  }
  process.stdout.write(`${JSON.stringify({ nsPerSample, ...result })}\n`);
}
