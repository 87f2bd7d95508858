/** A process that tests kill: keeps captures for as long as it lives and tells of each after it. */
import { writeSync } from 'node:fs';
import { createCaptureStore, openDatabases } from '@/db';
import { captureMeta } from '@/db/test-support/rig';

const { db } = openDatabases({ dataDir: process.argv[2]!, durability: 'normal' });
const store = createCaptureStore(db);
writeSync(1, 'open\n');

function* source() {
  for (let startIndex = 0; startIndex < 600_000; startIndex += 20_000) {
    const samples = Int32Array.from({ length: 20_000 }, (_, i) => Math.imul(startIndex + i, 2_654_435_761));
    yield { startIndex, count: samples.length, channels: [{ name: 'A', samples }] };
  }
}

for (;;) {
  const kept = await store.keep({ meta: captureMeta(), source: source(), gaps: [], fromIndex: 0 });
  writeSync(1, `kept ${kept!.id}\n`);
}
