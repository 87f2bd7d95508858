/** A rig through the signal path, block by block; nothing is held but what the path puts out. */
import { createPipeline } from '@/signal/pipeline';
import { edgeRising, type DirectionChange, type PipelineStatus } from '@/signal/pipeline-types';
import type { Bench } from '@/tests/accuracy/rigs';

export type Flank = { midT: number; rising: boolean };
export type SpeedEntry = { t: number; rpm: number; errorRpm: number };
export type RunResult = {
  endS: number;
  /** By channel, in order of time. */
  flanks: Flank[][];
  /** `rpm` NaN opens an unknown stretch. */
  speed: SpeedEntry[];
  directions: DirectionChange[];
  status: PipelineStatus;
};

export type Watcher = (
  directions: readonly DirectionChange[],
  nowS: number,
  status: () => PipelineStatus,
) => void;

/**
 * @param seconds from the beginning of the rig's time.
 * @param watch called after each block, with all changes of direction so far.
 */
export function runBench(bench: Bench, seconds: number, blockSamples = 1000, watch?: Watcher): RunResult {
  const { rig, setup, settings } = bench;
  const { rateHz } = rig.spec;
  const built = createPipeline({ rig: setup, settings, rateHz, channels: rig.channels, startIndex: 0 });
  if (!built.ok) throw new Error(`${built.issue.pointer}: ${built.issue.detail}`);
  const pipeline = built.value;
  const flanks: Flank[][] = rig.channels.map(() => []);
  const speed: SpeedEntry[] = [];
  const directions: DirectionChange[] = [];
  const count = Math.round(seconds * rateHz);
  for (let at = 0; at < count; at += blockSamples) {
    const length = Math.min(blockSamples, count - at);
    pipeline.process(rig.block(at, length), length);
    const { output } = pipeline;
    output.edges.forEach(({ count: found, midT, flags }, c) => {
      const list = flanks[c]!;
      for (let i = 0; i < found; i += 1)
        list.push({ midT: midT[i]!, rising: (flags[i]! & edgeRising) !== 0 });
    });
    for (let i = 0; i < output.speed.count; i += 1)
      speed.push({
        t: output.speed.t[i]!,
        rpm: output.speed.rpm[i]!,
        errorRpm: output.speed.errorRpm[i]!,
      });
    directions.push(...output.directions);
    pipeline.drain();
    watch?.(directions, (at + length) / rateHz, () => pipeline.status());
  }
  return { endS: count / rateHz, flanks, speed, directions, status: pipeline.status() };
}
