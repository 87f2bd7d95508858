/**
 * One stream as it is seen live: the signal path with the newest samples and marks beside it. It holds what a viewer
 * may ask for; the spool, not this, is what is kept.
 */
import type { BoardNote, Gap, Pipeline, PipelineStatus } from '@/signal/pipeline-types';
import type { SampleArray } from '@/signal/model';
import { edgeRising } from '@/signal/pipeline-types';
import { createPipeline } from '@/signal/pipeline';
import type { HubRig } from '@/server/hub/hub-types';
import { RecentMarks } from '@/server/hub/recent-edges';
import { RecentSignal } from '@/server/hub/recent-signal';
import { SpeedHistory } from '@/server/hub/speed-history';

const ringSeconds = 20;
const ringMaxSamples = 1 << 20;
const gapsHeld = 256;

export const markRising = 1;
export const markForward = 2;
export const markReverse = 4;

export class LiveSignal {
  pipeline: Pipeline | null = null;
  /** Why the settings in force cannot be run on this stream. */
  setupProblem: string | null = null;
  settingsVersion = 0;
  /** Lane whose edges the picture stands still on. */
  primary = 0;
  readonly signals: RecentSignal[];
  readonly edges: RecentMarks[];
  readonly rejected: RecentMarks[];
  readonly history = new SpeedHistory();
  gaps: Gap[] = [];
  nextIndex: number;
  #direction = 0;
  #status: PipelineStatus | null = null;

  constructor(
    rig: HubRig,
    readonly rateHz: number,
    readonly channels: readonly string[],
    startIndex: number,
  ) {
    this.nextIndex = startIndex;
    const capacity = Math.min(ringMaxSamples, Math.max(4096, Math.ceil(rateHz * ringSeconds)));
    this.signals = channels.map(() => new RecentSignal(capacity, { voltsPerCode: 1, codeOffset: 0 }));
    this.edges = channels.map(() => new RecentMarks());
    this.rejected = channels.map(() => new RecentMarks());
    this.configure(rig);
  }

  /** New settings or a changed rig hold from the next sample on; counting starts anew. */
  configure(rig: HubRig): void {
    const made = createPipeline({
      rig: rig.setup,
      settings: rig.settings,
      rateHz: this.rateHz,
      channels: this.channels,
      startIndex: this.nextIndex,
    });
    const setups = this.channels.map((name) => rig.setup.channels.find((c) => c.name === name));
    this.primary = Math.max(
      0,
      setups.findIndex((setup) => setup?.role === 'A' || setup?.role === 'U'),
    );
    setups.forEach((setup, i) => {
      if (setup !== undefined) this.signals[i]?.rescale(setup);
    });
    this.settingsVersion = rig.settingsVersion;
    this.pipeline = made.ok ? made.value : null;
    this.setupProblem = made.ok ? null : made.issue.detail;
    this.#direction = 0;
    this.#status = null;
  }

  append(startIndex: number, arrays: readonly SampleArray[], count: number): void {
    for (let i = 0; i < arrays.length; i += 1) {
      this.signals[i]?.append(startIndex, arrays[i] as SampleArray);
    }
    this.nextIndex = startIndex + count;
    this.#status = null;
    if (this.pipeline === null) return;
    this.pipeline.process(arrays, count);
    this.#take(this.pipeline);
  }

  skip(lostSamples: number, estimated: boolean): void {
    const fromS = this.nextIndex / this.rateHz;
    this.nextIndex += lostSamples;
    this.gaps.push({ fromS, toS: this.nextIndex / this.rateHz, lostSamples, estimated });
    if (this.gaps.length > gapsHeld) this.gaps.shift();
    this.#status = null;
    if (this.pipeline === null) return;
    this.pipeline.skip(lostSamples, estimated);
    this.#take(this.pipeline);
  }

  /** What the hub knows of the board beside its samples. */
  note(note: BoardNote): void {
    this.pipeline?.note(note);
    this.#status = null;
  }

  /** The signal path threw: the samples go on being drawn and kept, the speed does not. */
  fail(): void {
    this.pipeline = null;
    this.#status = null;
    this.setupProblem =
      'The signal path failed on this stream; its samples are kept. Save the settings to start it anew.';
  }

  status(): PipelineStatus | null {
    this.#status ??= this.pipeline?.status() ?? null;
    return this.#status;
  }

  #take(pipeline: Pipeline): void {
    const { output } = pipeline;
    // Edges of one block carry the direction known at their instant.
    let change = 0;
    for (let c = 0; c < output.edges.length; c += 1) {
      const edges = output.edges[c];
      if (edges === undefined) continue;
      let direction = this.#direction;
      change = 0;
      for (let i = 0; i < edges.count; i += 1) {
        const t = edges.t[i] as number;
        for (; change < output.directions.length; change += 1) {
          const next = output.directions[change];
          if (next === undefined || next.t > t) break;
          direction = next.value === 'forward' ? markForward : next.value === 'reverse' ? markReverse : 0;
        }
        this.edges[c]?.push(t, ((edges.flags[i] as number) & edgeRising) | direction);
      }
      const rejected = output.rejected[c];
      for (let i = 0; i < (rejected?.count ?? 0); i += 1) this.rejected[c]?.push(rejected?.t[i] as number, 0);
    }
    const last = output.directions[output.directions.length - 1];
    if (last !== undefined) {
      this.#direction = last.value === 'forward' ? markForward : last.value === 'reverse' ? markReverse : 0;
    }
    this.history.add(this.nextIndex / this.rateHz, () => this.status()?.speedRpm ?? null);
    pipeline.drain();
  }
}
