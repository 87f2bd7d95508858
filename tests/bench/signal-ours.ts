/**
 * Timed passes of the whole signal path (findings, wheel face and all) over the codes in a file; of two channels where
 * `2` follows. Prints JSON.
 */
import { createPipeline } from '@/signal/pipeline';
import { edgeRising } from '@/signal/pipeline-types';
import { signalCase } from '@/tests/bench/signal-data';
import { inBlocks, quarterLater, readCodes, timePasses } from '@/tests/bench/signal-passes';
import type { PassResult } from '@/tests/bench/signal-passes';
import { benchRig, benchSettings } from '@/tests/bench/signal-setup';

const codes = readCodes();
const isPair = process.argv[3] === '2';
const rig = benchRig(isPair ? 2 : 1);
const channels = rig.channels.map(({ name }) => name);
const a = inBlocks(codes);
const b = inBlocks(quarterLater(codes));
const arrays = a.map((block, i) => (isPair ? [block, b[i] ?? block] : [block]));

function pass(): PassResult {
  const built = createPipeline({
    rig,
    settings: benchSettings,
    rateHz: signalCase.rateHz,
    channels,
    startIndex: 0,
  });
  if (!built.ok) throw new Error(built.issue.detail);
  const pipeline = built.value;
  let edges = 0;
  let speedSum = 0;
  for (const blocks of arrays) {
    pipeline.process(blocks, blocks[0]?.length ?? 0);
    const found = pipeline.output.edges[0];
    if (found) for (let i = 0; i < found.count; i += 1) if ((found.flags[i] ?? 0) & edgeRising) edges += 1;
    const { count, rpm } = pipeline.output.speed;
    for (let i = 0; i < count; i += 1) if (rpm[i] === rpm[i]) speedSum += rpm[i] as number;
    pipeline.drain();
  }
  return { edges, speedSum };
}

timePasses(codes.length, pass);
