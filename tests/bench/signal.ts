/** The signal path against a C program of the same work and against fili's own filter. */
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { runForJson, runTypeScript } from '@/tests/bench/child';
import { heading, interleave, line, median, ratios } from '@/tests/bench/rounds';
import { timedPasses } from '@/tests/bench/time-passes';
import { makeCodes, signalCase } from '@/tests/bench/signal-data';

type Pass = { nsPerSample: number; edges: number; speedSum: number };

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
    const found = await interleave<Pass>(rounds, {
      c: () => runForJson(program, [data, ...numbers]),
      ours: () => runTypeScript('tests/bench/signal-ours.ts', [data]),
      fili: () => runTypeScript('tests/bench/signal-fili.ts', [data]),
    });
    print(rounds, found.c ?? [], found.ours ?? [], found.fili ?? []);
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

function print(rounds: number, c: Pass[], ours: Pass[], fili: Pass[]): void {
  const ns = (passes: Pass[]) => passes.map((pass) => pass.nsPerSample);
  heading(
    `Signal path: 4th order, band, edges, speed; one channel, int16 (${rounds} interleaved rounds, CPU time)`,
  );
  line('C, gcc -O2', `${median(ns(c)).toFixed(2)} ns/sample`);
  line('ours', `${median(ns(ours)).toFixed(2)} ns/sample`);
  line('fili singleStep and a plain edge loop', `${median(ns(fili)).toFixed(2)} ns/sample`);
  line('ours / C', ratios(ns(ours), ns(c)), 'at most 1.8, aim 1.5');
  line('fili / ours', ratios(ns(fili), ns(ours)), 'at least 3');
  line('edges: C, ours, fili', [c, ours, fili].map((passes) => passes[0]?.edges).join(', '));
  line('mean speed: C, ours, fili, rpm', [c, ours, fili].map((p) => meanRpm(p[0])).join(', '));
}

function meanRpm(pass: Pass | undefined): string {
  return pass ? (pass.speedSum / (pass.edges - 1)).toFixed(4) : '';
}
