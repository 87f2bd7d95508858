/**
 * Splitting a stream anywhere changes nothing, bit for bit, on rigs on which something goes wrong: edges, speed,
 * direction, counts, findings with their evidence, wheel face.
 */
import { describe, expect, it } from 'vitest';
import type { SampleArray } from '@/signal/model';
import { createPipeline } from '@/signal/pipeline';
import type { Pipeline, PipelineOutput } from '@/signal/pipeline-types';
import { seeded } from '@/signal/test-signals';
import { createRig } from '@/simulator/rig-model';
import { caseCodes } from '@/tests/accuracy/findings/cases';
import { makeCase } from '@/tests/accuracy/findings/judge';
import type { Bench } from '@/tests/accuracy/findings/machine';

const longestS = 25;

type Piece = { arrays: SampleArray[] } | { lost: number };

/** The rig's stream in long pieces, with its lost blocks. */
function streamOf({ spec, rigSeed }: Bench, seconds: number): Piece[] {
  const rig = createRig(spec, rigSeed);
  const size = Math.max(1, Math.round(spec.rateHz / 10));
  const pieces: Piece[] = [];
  for (let at = 0; at < seconds * spec.rateHz; at += size) {
    const lost = rig.faultsAt(rig.timeOf(at)).some(({ kind }) => kind === 'lost-blocks');
    pieces.push(lost ? { lost: size } : { arrays: rig.block(at, size) });
  }
  return pieces;
}

function run(bench: Bench, pieces: readonly Piece[], random: (() => number) | null): unknown {
  const { setup, settings, spec } = bench;
  const channels = spec.channels.map(({ name }) => name);
  const made = createPipeline({ rig: setup, settings, rateHz: spec.rateHz, channels, startIndex: 0 });
  if (!made.ok) throw new Error(made.issue.detail);
  const pipeline = made.value;
  const taken: unknown[] = [];
  for (const piece of pieces) {
    if ('lost' in piece) pipeline.skip(piece.lost, false);
    else feed(pipeline, piece.arrays, random);
    take(pipeline.output, taken);
    pipeline.drain();
  }
  return { taken, status: pipeline.status() };
}

function feed(pipeline: Pipeline, arrays: readonly SampleArray[], random: (() => number) | null): void {
  const count = arrays[0]!.length;
  for (let from = 0; from < count;) {
    const wanted = random ? 1 + Math.floor(random() ** 3 * count) : count;
    const size = Math.min(count - from, wanted);
    pipeline.process(
      arrays.map((array) => array.subarray(from, from + size)),
      size,
    );
    from += size;
  }
}

function take(
  { edges, rejected, speed, directions, bands, closedFindings }: PipelineOutput,
  into: unknown[],
) {
  for (const { t, midT, flags, count } of edges)
    into.push(t.slice(0, count), midT.slice(0, count), flags.slice(0, count));
  for (const { t, count } of rejected) into.push(t.slice(0, count));
  into.push(
    speed.t.slice(0, speed.count),
    speed.rpm.slice(0, speed.count),
    speed.errorRpm.slice(0, speed.count),
  );
  // Two channels may report their bands in either order.
  into.push([...directions], [...bands].map((band) => JSON.stringify(band)).sort(), [...closedFindings]);
}

describe('any split gives the same', () => {
  it.each(caseCodes)('on a rig with %s', (code) => {
    for (const seed of [11, 12]) {
      const made = makeCase(code, seed);
      const pieces = streamOf(made, Math.min(longestS, made.seconds));
      expect(run(made, pieces, seeded(seed))).toEqual(run(made, pieces, null));
    }
  });
});
