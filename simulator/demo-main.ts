/**
 * The demo rigs as a process of their own. Reads `{"baseUrl": "...", "rigs": [{"name": "...", "key": "..."}]}` as one
 * JSON text from standard input; ends on SIGTERM or SIGINT, or when the process that started it goes away.
 * With `--describe` it prints `[{name, rig, settings}]`, what the hub is to be told about them, and ends.
 */
import { demoRigs, startDemoRigs } from '@/simulator/demo-lab';

type Order = { baseUrl: string; rigs: { name: string; key: string }[] };

async function main(): Promise<void> {
  if (process.argv.includes('--describe')) {
    const described = demoRigs.map(({ name, rig, settings }) => ({ name, rig, settings }));
    process.stdout.write(`${JSON.stringify(described)}\n`);
    return;
  }
  const order = await readOrder();
  const keys = Object.fromEntries(order.rigs.map(({ name, key }) => [name, key]));
  const run = startDemoRigs({
    baseUrl: order.baseUrl,
    keys,
    onNote: (line) => process.stderr.write(`${line}\n`),
  });
  const stop = () => void run.stop().then(() => process.exit(0));
  process.once('SIGTERM', stop);
  process.once('SIGINT', stop);
  process.once('disconnect', stop);
  const parent = process.ppid;
  setInterval(() => {
    if (process.ppid !== parent) stop();
  }, 2000).unref();
}

async function readOrder(): Promise<Order> {
  const parts: Buffer[] = [];
  for await (const part of process.stdin) parts.push(part as Buffer);
  try {
    const order = JSON.parse(Buffer.concat(parts).toString('utf8')) as Partial<Order>;
    if (typeof order.baseUrl === 'string' && Array.isArray(order.rigs)) return order as Order;
  } catch {
    // The same sentence says both.
  }
  process.stderr.write(
    'demo rigs: expected {"baseUrl", "rigs": [{"name", "key"}]} as JSON on standard input\n',
  );
  process.exit(2);
}

await main();
