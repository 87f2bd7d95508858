/**
 * The work of the C program alone, by the parts of the signal path as it calls them: the filter's kernel, the band, and the
 * speed of each tooth. Where `2` follows, filter and band of two channels without speed. Prints JSON.
 */
import { createCascade, runCascadeFromInt16 } from '@/signal/biquad';
import { runDetector } from '@/signal/detector';
import { createDetector, setThresholds } from '@/signal/detector-state';
import type { DetectorSink } from '@/signal/detector-state';
import { designFilters } from '@/signal/filter-design';
import { edgeRising } from '@/signal/pipeline-types';
import { SpeedMeter } from '@/signal/speed-meter';
import { signalCase } from '@/tests/bench/signal-data';
import { inBlocks, quarterLater, readCodes, timePasses } from '@/tests/bench/signal-passes';
import type { PassResult } from '@/tests/bench/signal-passes';
import { benchSettings } from '@/tests/bench/signal-setup';

const { rateHz, voltsPerCode, operateV, releaseV, teeth, block } = signalCase;
const codes = readCodes();
const isPair = process.argv[3] === '2';
const channels = isPair ? [inBlocks(codes), inBlocks(quarterLater(codes))] : [inBlocks(codes)];
const sections = designFilters(benchSettings.filter, rateHz);
const sink: DetectorSink = { rejected: () => undefined, wobble: () => undefined };

function createSide(blocks: Int16Array[]) {
  const detector = createDetector(0, false);
  setThresholds(detector, operateV, releaseV);
  return { blocks, cascade: createCascade(sections), detector, volts: new Float64Array(block + 1) };
}

function pass(): PassResult {
  const sides = channels.map(createSide);
  const meter = new SpeedMeter('tooth', 1, teeth, 1);
  let edges = 0;
  let speedSum = 0;
  for (let i = 0; i * block < codes.length; i += 1) {
    for (const { blocks, cascade, detector, volts } of sides) {
      const part = blocks[i] as Int16Array;
      const count = part.length;
      runCascadeFromInt16(cascade, part, 0, count, 0, voltsPerCode, volts, 1);
      if (i === 0) volts[0] = volts[1] as number;
      runDetector(detector, volts, 1, count, i * block - 1, sink);
      volts[0] = volts[count] as number;
      const found = detector.edges;
      for (let k = 0; k < found.count; k += 1) {
        if (((found.flags[k] as number) & edgeRising) === 0) continue;
        edges += 1;
        if (isPair) continue;
        meter.t = (found.midAt[k] as number) / rateHz;
        if (meter.add(edges)) speedSum += meter.latest.rpm;
      }
      found.count = 0;
    }
  }
  return { edges, speedSum };
}

timePasses(codes.length, pass);
