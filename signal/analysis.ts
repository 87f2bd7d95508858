/**
 * The same signal path over a whole capture: what `GET /captures/:id/analysis` answers.
 */
import { designFilters } from '@/signal/filter-design';
import type { Section } from '@/signal/filter-design';
import type { Analysis, Channel, Finding, Result, RigSetup, SampleArray, Settings } from '@/signal/model';
import { BothWaysFeed, longestMemorySamples } from '@/signal/both-ways-feed';
import { captureStatistics } from '@/signal/capture-statistics';
import { WindowKeeper } from '@/signal/capture-statistics/window';
import { createPipeline } from '@/signal/pipeline';
import { edgeLate, edgeRising } from '@/signal/pipeline-types';
import type { DirectionChange, Pipeline, SetupIssue } from '@/signal/pipeline-types';
import { memorySamples } from '@/signal/statistics/zero-phase';
import { wholeGap } from '@/signal/ticks';

export type AnalyserOptions = {
  rig: RigSetup;
  settings: Settings;
  rateHz: number;
  /** Names of the channels present, in the order of the arrays given to `push`. */
  channels: readonly string[];
  /** Filter forward and backward: no delay at all, the gain squared. */
  zeroPhase?: boolean;
};

/** Feed it a capture's samples and gaps in order, then ask once for the result. */
export interface Analyser {
  /** `arrays[i]` belongs to `channels[i]`; the first `count` samples of each are taken. */
  push(arrays: readonly SampleArray[], count: number): void;
  /** Samples that were lost; fewer than half of one, or no number of them, is no gap. */
  gap(lostSamples: number, estimated: boolean): void;
  /** Times are seconds from the capture's first sample; findings still open end with the capture. */
  finish(): Analysis;
}

type ChannelAnalysis = Analysis['channels'][string];

/** Samples go in slices of this many, so that output is taken over before it grows large. */
const sliceSamples = 65_536;

/**
 * An empty analysis of a capture, to be fed from its first sample on.
 * @returns the first thing that is wrong with rig, settings, rate or channels as an issue (`validateSetup`), and
 * `bad-filter` for a filter too slow to be run both ways; never throws for these.
 */
export function createAnalyser(options: AnalyserOptions): Result<Analyser, SetupIssue> {
  const { rig, settings, rateHz, channels, zeroPhase = false } = options;
  const window = new WindowKeeper(channels.length);
  const made = createPipeline({
    rig,
    settings,
    rateHz,
    channels,
    startIndex: 0,
    tap: window,
    bothWays: zeroPhase,
  });
  if (!made.ok) return made;
  const sections = zeroPhase ? designFilters(settings.filter, rateHz) : [];
  const memory = memorySamples(sections);
  if (!memory.ok || memory.value > longestMemorySamples) return { ok: false, issue: tooSlow };
  const analyser = new CaptureAnalyser(made.value, options, window);
  if (zeroPhase) analyser.feedBothWays(sections, memory.value);
  return { ok: true, value: analyser };
}

const tooSlow: SetupIssue = {
  code: 'bad-filter',
  pointer: '/filter',
  detail: 'A filter this slow cannot be run forward and backward; raise its lowest cutoff.',
};

/** A capture in memory, in one call. A chunk is arrays of one length (one a channel, in order) or a gap. */
export function analyse(
  options: AnalyserOptions,
  chunks: Iterable<{ arrays: readonly SampleArray[] } | { lostSamples: number; estimated: boolean }>,
): Result<Analysis, SetupIssue> {
  const made = createAnalyser(options);
  if (!made.ok) return made;
  for (const chunk of chunks) {
    if ('arrays' in chunk) made.value.push(chunk.arrays, chunk.arrays[0]?.length ?? 0);
    else made.value.gap(chunk.lostSamples, chunk.estimated);
  }
  return { ok: true, value: made.value.finish() };
}

class CaptureAnalyser implements Analyser {
  private readonly pipeline: Pipeline;
  private readonly options: AnalyserOptions;
  private readonly window: WindowKeeper;
  private readonly names: readonly string[];
  private readonly channels: ChannelAnalysis[];
  private readonly speed: Analysis['speed'] = [];
  private readonly changes: DirectionChange[] = [];
  private readonly gaps: Analysis['gaps'] = [];
  private readonly findings: Finding[] = [];
  private feed: BothWaysFeed | null = null;

  constructor(pipeline: Pipeline, options: AnalyserOptions, window: WindowKeeper) {
    this.pipeline = pipeline;
    this.options = options;
    this.window = window;
    this.names = options.channels;
    this.channels = options.channels.map(() => ({
      lowV: null,
      highV: null,
      operateV: null,
      releaseV: null,
      band: [],
      edges: [],
    }));
  }

  feedBothWays(sections: readonly Section[], memory: number): void {
    const { rig } = this.options;
    const channels = this.names.map((name) => rig.channels.find((own) => own.name === name) as Channel);
    this.feed = new BothWaysFeed(channels, sections, memory, (arrays, count, filtered) =>
      this.run(arrays, count, filtered),
    );
  }

  push(arrays: readonly SampleArray[], count: number): void {
    if (this.feed) this.feed.push(arrays, count);
    else this.run(arrays, count);
  }

  private run(arrays: readonly SampleArray[], count: number, filtered?: readonly Float64Array[]): void {
    for (let from = 0; from < count; from += sliceSamples) {
      const size = Math.min(sliceSamples, count - from);
      const whole = from === 0 && size === count;
      this.pipeline.process(
        whole ? arrays : arrays.map((array) => array.subarray(from, from + size)),
        size,
        filtered?.map((volts) => volts.subarray(from, from + size)),
      );
      this.take();
    }
  }

  gap(lostSamples: number, estimated: boolean): void {
    if (wholeGap(lostSamples) === 0) return;
    this.feed?.end();
    this.pipeline.skip(lostSamples, estimated);
    this.take();
  }

  finish(): Analysis {
    this.feed?.end();
    this.take();
    const status = this.pipeline.status();
    const endS = status.nowS;
    const channels: Analysis['channels'] = {};
    this.names.forEach((name, index) => {
      const { lowV, highV, operateV, releaseV } = status.channels[index]!;
      channels[name] = { ...this.channels[index]!, lowV, highV, operateV, releaseV };
    });
    const { rig, rateHz } = this.options;
    const statistics = captureStatistics({
      rig,
      rateHz,
      names: this.names,
      channels,
      speed: this.speed,
      status,
      window: this.window.finish(this.pipeline.motionNow()),
    });
    const open = status.findings.map((finding) => ({ ...finding, to: endS }));
    return {
      channels,
      speed: this.speed,
      direction: stretches(this.changes, endS),
      turns: status.turns,
      positions: status.positions,
      pulses: status.pulses,
      gaps: this.gaps,
      delayS: status.delayS,
      margin: status.margin,
      wheelFace: status.wheelFace,
      statistics,
      findings: [...this.findings, ...open].sort((a, b) => a.from - b.from),
    };
  }

  private take(): void {
    const { output } = this.pipeline;
    output.edges.forEach((columns, index) => {
      const { edges } = this.channels[index]!;
      for (let i = 0; i < columns.count; i++) {
        const flags = columns.flags[i]!;
        const edge = { t: columns.t[i]!, midT: columns.midT[i]!, rising: (flags & edgeRising) !== 0 };
        edges.push((flags & edgeLate) !== 0 ? { ...edge, late: true } : edge);
      }
    });
    for (const { channel, t, operateV, releaseV } of output.bands) {
      this.channels[this.names.indexOf(channel)]!.band.push({ t, operateV, releaseV });
    }
    for (let i = 0; i < output.speed.count; i++) {
      this.speed.push({
        t: output.speed.t[i]!,
        rpm: known(output.speed.rpm[i]!),
        errorRpm: known(output.speed.errorRpm[i]!),
      });
    }
    this.changes.push(...output.directions);
    for (const { fromS, toS, lostSamples, estimated } of output.gaps)
      this.gaps.push({ from: fromS, to: toS, lostSamples, estimated });
    this.findings.push(...output.closedFindings);
    this.pipeline.drain();
  }
}

function stretches(changes: readonly DirectionChange[], endS: number): Analysis['direction'] {
  return changes
    .map(({ t, value }, index) => ({ from: t, to: changes[index + 1]?.t ?? endS, value }))
    .filter(({ from, to }) => to > from);
}

function known(value: number): number | null {
  return Number.isFinite(value) ? value : null;
}
