/** The signal path against a C program of the same work, against fili's own filter, and against its own bare loop. */
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { loadavg, tmpdir } from 'node:os';
import { join } from 'node:path';
import { build } from 'esbuild';
import { root, runForJson } from '@/tests/bench/child';
import { heading, line, median, ratios } from '@/tests/bench/rounds';
import { makeCodes, signalCase } from '@/tests/bench/signal-data';
import { timedPasses } from '@/tests/bench/signal-passes';

type Pass = { nsPerSample: number; edges: number; speedSum: number };
/** Within the repository, so that its packages are found. */
const bundles = join(root, 'dist/bench');
type Variant = 'c' | 'parts' | 'path' | 'fili' | 'bareTwo' | 'pathTwo';

export async function benchSignal(rounds: number): Promise<void> {
  const folder = mkdtempSync(join(tmpdir(), 'turnmark-bench-'));
  try {
    const data = join(folder, 'codes.i16');
    const program = join(folder, 'signal-path');
    writeFileSync(data, makeCodes());
    // gcc prints nothing on success; the shell's echo makes the JSON that is waited for.
    await runForJson('sh', ['-c', `gcc -O2 -o "$0" tests/bench/c/signal-path.c -lm && echo {}`, program]);
    const { rateHz, cutoffHz, voltsPerCode, operateV, releaseV, teeth } = signalCase;
    const numbers = [rateHz, cutoffHz, voltsPerCode, operateV, releaseV, teeth, timedPasses].map(String);
    await bundle(['signal-parts', 'signal-ours', 'signal-fili']);
    const run = (name: string, ...args: string[]) =>
      runForJson<Pass>(process.execPath, [join(bundles, `${name}.mjs`), data, ...args]);
    const variants: Record<Variant, () => Promise<Pass>> = {
      c: () => runForJson(program, [data, ...numbers]),
      parts: () => run('signal-parts'),
      path: () => run('signal-ours'),
      fili: () => run('signal-fili'),
      bareTwo: () => run('signal-parts', '2'),
      pathTwo: () => run('signal-ours', '2'),
    };
    print(rounds, await thereAndBack(rounds, variants));
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

/** One file each, as the hub itself is built: across modules the same code is a quarter slower. */
async function bundle(names: string[]): Promise<void> {
  await build({
    entryPoints: names.map((name) => join(root, 'tests/bench', `${name}.ts`)),
    outdir: bundles,
    outExtension: { '.js': '.mjs' },
    bundle: true,
    packages: 'external',
    platform: 'node',
    target: 'node20',
    format: 'esm',
    logLevel: 'warning',
  });
}

/** Every variant once a round, each in a process of its own; every other round backwards. */
async function thereAndBack(
  rounds: number,
  variants: Record<Variant, () => Promise<Pass>>,
): Promise<Record<Variant, Pass[]>> {
  const found: Record<Variant, Pass[]> = { c: [], parts: [], path: [], fili: [], bareTwo: [], pathTwo: [] };
  const order = Object.keys(variants) as Variant[];
  for (let round = 0; round < rounds; round += 1) {
    for (const name of round % 2 === 0 ? order : order.toReversed()) found[name].push(await variants[name]());
  }
  return found;
}

function print(rounds: number, found: Record<Variant, Pass[]>): void {
  const ns = (name: Variant) => found[name].map((pass) => pass.nsPerSample);
  const ratio = (upper: Variant, lower: Variant) => ratios(ns(upper), ns(lower));
  const show = (label: string, name: Variant) => line(label, `${median(ns(name)).toFixed(2)} ns/sample`);
  heading(
    `Signal path: 4th order, band, edges, speed; int16 (${rounds} interleaved rounds, CPU time of the fastest of ` +
      `${timedPasses} passes, load ${loadavg()[0]?.toFixed(1)})`,
  );
  show('C, gcc -O2', 'c');
  show('the same work by our parts', 'parts');
  show('the whole path, one channel', 'path');
  show('fili singleStep and a plain edge loop', 'fili');
  show('filter and band, two channels', 'bareTwo');
  show('the whole path, two channels', 'pathTwo');
  line('the same work: ours / C', ratio('parts', 'c'), 'at most 1.8, aim 1.5');
  line('the same work: fili / ours', ratio('fili', 'parts'), 'at least 3');
  line('the whole path / C', ratio('path', 'c'));
  line('fili / the whole path', ratio('fili', 'path'));
  line('two channels: the whole path / filter and band', ratio('pathTwo', 'bareTwo'), 'at most 2.5');
  const same: Variant[] = ['c', 'parts', 'path', 'fili'];
  line('edges: C, parts, path, fili', same.map((name) => found[name][0]?.edges).join(', '));
  line('mean speed of these, rpm', same.map((name) => meanRpm(found[name][0])).join(', '));
}

function meanRpm(pass: Pass | undefined): string {
  return pass ? (pass.speedSum / (pass.edges - 1)).toFixed(4) : '';
}
