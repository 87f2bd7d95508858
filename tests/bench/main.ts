/** `npm run bench -- [signal] [hub] [glass] [soak]`: the figures, as ratios of one run. All parts without a name. */
import { cpus, loadavg } from 'node:os';
import { benchGlass } from '@/tests/bench/glass';
import { benchHub } from '@/tests/bench/hub';
import { benchSignal } from '@/tests/bench/signal';
import { benchSoak } from '@/tests/bench/soak';

const parts: Record<string, () => Promise<void>> = {
  signal: () => benchSignal(7),
  hub: () => benchHub(5),
  glass: () => benchGlass(20),
  soak: () => benchSoak(60),
};

const wanted = process.argv.slice(2);
const unknown = wanted.find((name) => !(name in parts));
if (unknown !== undefined) {
  process.stderr.write(`there is no part "${unknown}": ${Object.keys(parts).join(', ')}\n`);
  process.exitCode = 2;
} else {
  const machine = `${cpus().length} x ${cpus()[0]?.model ?? 'unknown'}, load ${loadavg()[0]?.toFixed(2)}`;
  process.stdout.write(`Node ${process.version}, ${machine}\n`);
  for (const [name, run] of Object.entries(parts))
    if (wanted.length === 0 || wanted.includes(name)) await run();
}
