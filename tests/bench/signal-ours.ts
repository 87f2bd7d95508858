/** Timed passes of our signal path over the codes in a file. Prints JSON. */
import { createPipeline } from '@/signal/pipeline';
import { edgeRising } from '@/signal/pipeline-types';
import type { RigSetup, Settings } from '@/signal/model';
import { signalCase } from '@/tests/bench/signal-data';
import { timePasses } from '@/tests/bench/time-passes';

const { rateHz, cutoffHz, voltsPerCode, operateV, releaseV, teeth, block } = signalCase;
const rig: RigSetup = {
  sensing: 'single',
  wheel: { pulsesPerTurn: teeth, missingPulses: 0, gearRatio: 1, widthClasses: null },
  channels: [
    {
      name: 'A',
      role: 'A',
      voltsPerCode,
      codeOffset: 0,
      minCode: -32768,
      maxCode: 32767,
      maxInputV: null,
      sensor: {
        kind: 'linear',
        supplyV: null,
        quiescentV: null,
        sensitivityMvPerMt: null,
        activeLow: false,
        operateMt: null,
        releaseMt: null,
      },
    },
  ],
  expectedDirection: null,
  ratedRpm: null,
};
const settings: Settings = {
  filter: { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz },
  band: { mode: 'fixed', operateV, releaseV },
  holdoffS: 0,
  speed: { method: 'tooth', windowS: 0.1, stoppedAfterS: 2 },
};

function pass(codes: Int16Array): { edges: number; speedSum: number } {
  const built = createPipeline({ rig, settings, rateHz, channels: ['A'], startIndex: 0 });
  if (!built.ok) throw new Error(built.issue.detail);
  const pipeline = built.value;
  let edges = 0;
  let speedSum = 0;
  for (let at = 0; at < codes.length; at += block) {
    const part = codes.subarray(at, at + block);
    pipeline.process([part], part.length);
    const found = pipeline.output.edges[0];
    if (found) for (let i = 0; i < found.count; i += 1) if ((found.flags[i] ?? 0) & edgeRising) edges += 1;
    const { count, rpm } = pipeline.output.speed;
    for (let i = 0; i < count; i += 1) if (rpm[i] === rpm[i]) speedSum += rpm[i] as number;
    pipeline.drain();
  }
  return { edges, speedSum };
}

timePasses(pass);
