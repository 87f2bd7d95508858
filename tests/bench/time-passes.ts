/** Times the passes of one variant over the codes in the file that the command line names, and prints JSON. */
import { readFileSync } from 'node:fs';

/** Enough for what runs beside the loop (compilation, collection) to weigh little. */
export const timedPasses = 6;

export function timePasses(pass: (codes: Int16Array) => { edges: number; speedSum: number }): void {
  const bytes = readFileSync(process.argv[2] ?? '');
  const codes = new Int16Array(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.length));
  let result = pass(codes);
  const before = process.cpuUsage();
  for (let i = 0; i < timedPasses; i += 1) result = pass(codes);
  const spent = process.cpuUsage(before);
  const nsPerSample = ((spent.user + spent.system) * 1000) / (codes.length * timedPasses);
  process.stdout.write(`${JSON.stringify({ nsPerSample, ...result })}\n`);
}
