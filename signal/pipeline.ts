/**
 * The one signal path: live, replay, rerun, proof and preview all run it.
 *
 * Samples go through in chunks that end at ticks (10 a second or more, at fixed places of the stream) or where a block ends. What is
 * decided depends on samples and ticks only, so that splitting a stream into blocks anywhere changes nothing, bit for bit.
 */
import { ChannelPath, chunkSamples } from '@/signal/channel-path';
import { createSpeedColumns } from '@/signal/columns';
import { mergeEdges } from '@/signal/edge-merge';
import type { Lane } from '@/signal/edge-merge';
import { createDelayCurve } from '@/signal/delay-curve';
import { designFilters } from '@/signal/filter-design';
import { FindingsDesk } from '@/signal/findings/desk';
import { IndexWatch } from '@/signal/index-watch';
import type { Channel, Result, SampleArray, Settings } from '@/signal/model';
import { Motion } from '@/signal/motion';
import type {
  BoardNote,
  MotionNow,
  Pipeline,
  PipelineOptions,
  PipelineOutput,
  PipelineStatus,
  SampleTap,
  SetupIssue,
} from '@/signal/pipeline-types';
import { noiseBehind } from '@/signal/response';
import { memorySamples } from '@/signal/statistics/zero-phase';
import { statusOf } from '@/signal/status';
import { shaftStatus } from '@/signal/status-shaft';
import { samplesPerTick, wholeGap } from '@/signal/ticks';
import { neededRoles, validateSetup } from '@/signal/validate-setup';

/**
 * Builds the signal path of a stream.
 * @returns the first thing that is wrong with rig, settings, rate or channels as an issue; never throws for these.
 */
export function createPipeline(options: PipelineOptions): Result<Pipeline, SetupIssue> {
  const { rig, settings, rateHz, channels, startIndex } = options;
  const issue = validateSetup(rig, settings, rateHz, channels, startIndex);
  if (issue) return { ok: false, issue };
  return { ok: true, value: new SignalPipeline(options) };
}

class SignalPipeline implements Pipeline {
  readonly output: PipelineOutput;
  private readonly rateHz: number;
  private readonly speedSettings: Settings['speed'];
  private readonly paths: ChannelPath[];
  private readonly motion: Motion;
  /** Place of each path in the sensing arrangement; -1: none. */
  private readonly roles: number[];
  private readonly lanes: Lane[] = [];
  private readonly desk: FindingsDesk;
  private readonly indexWatch: IndexWatch | null;
  private readonly tickSamples: number;
  private readonly tap: SampleTap | null;
  private nextAt: number;

  constructor({ rig, settings, rateHz, channels, startIndex, tap, bothWays }: PipelineOptions) {
    const designed = designFilters(settings.filter, rateHz);
    // Filtered both ways, nothing is left to filter or to be taken off, and noise has passed the filter twice.
    const sections = bothWays ? [] : designed;
    const passed = bothWays ? [...designed, ...designed] : designed;
    const { gain: gainOfNoise, correlation } = noiseBehind(passed);
    const memory = memorySamples(sections);
    const delays = createDelayCurve(sections, rateHz);
    const bands: PipelineOutput['bands'] = [];
    const speed = createSpeedColumns();
    const directions: PipelineOutput['directions'] = [];
    const { pulsesPerTurn, missingPulses } = rig.wheel;
    this.rateHz = rateHz;
    this.speedSettings = settings.speed;
    this.tap = tap ?? null;
    this.nextAt = startIndex;
    this.tickSamples = samplesPerTick(rateHz);
    const needed: readonly string[] = neededRoles(rig);
    const isAlone = needed.length === 1 && rig.channels.every(({ role }) => role !== 'Z');
    this.paths = channels.map((name) => {
      const channel = rig.channels.find((own) => own.name === name) as Channel;
      return new ChannelPath({
        channel,
        band: settings.band,
        sections,
        gainOfNoise,
        correlation,
        delays,
        rateHz,
        startIndex,
        holdoffS: settings.holdoffS,
        missingPulses: needed.includes(channel.role) ? missingPulses : 0,
        teethPerTurn: channel.role === 'Z' ? 1 : Math.max(1, pulsesPerTurn - missingPulses),
        findLateS: isAlone ? settings.speed.stoppedAfterS : 0,
        bands,
      });
    });
    this.roles = this.paths.map(({ channel }, index) => {
      const place = needed.indexOf(channel.role);
      const first = this.paths.findIndex((other) => other.channel.role === channel.role);
      return first === index ? place : -1;
    });
    this.paths.forEach((path, index) => {
      const role = this.roles[index]!;
      if (role >= 0) this.lanes.push({ path, queue: path.queue, role });
    });
    this.motion = new Motion(rig, settings, rateHz, startIndex, speed, directions);
    this.output = {
      edges: this.paths.map(({ edges }) => edges),
      rejected: this.paths.map(({ rejectedMarks }) => rejectedMarks),
      speed,
      directions,
      bands,
      gaps: [],
      closedFindings: [],
    };
    const index = channels.findIndex((name) =>
      rig.channels.some((own) => own.name === name && own.role === 'Z'),
    );
    this.indexWatch = IndexWatch.of(
      this.paths[index],
      this.paths[this.roles.indexOf(0)],
      this.motion,
      rateHz,
    );
    this.desk = new FindingsDesk(
      {
        rig,
        settings,
        rateHz,
        paths: this.paths,
        motion: this.motion,
        primary: this.roles.indexOf(0),
        lanes: needed.map((_role, place) => this.roles.indexOf(place)),
        index,
        indexWatch: this.indexWatch,
        settleS: (memory.ok ? memory.value : 0) / rateHz,
      },
      this.output.closedFindings,
    );
  }

  process(arrays: readonly SampleArray[], count: number, filtered?: readonly Float64Array[]): void {
    if (arrays.length !== this.paths.length) {
      throw new Error(`process wants ${this.paths.length} arrays, one a channel, and got ${arrays.length}`);
    }
    let from = 0;
    while (from < count) {
      const toTick = this.tickSamples - (this.nextAt % this.tickSamples);
      const size = Math.min(count - from, toTick, chunkSamples);
      for (let c = 0; c < this.paths.length; c++) {
        this.paths[c]!.advance(arrays[c]!, from, from + size, this.nextAt, filtered?.[c]);
        this.tap?.chunk(c, this.paths[c]!.filtered, 1, size, this.nextAt);
      }
      from += size;
      this.nextAt += size;
      mergeEdges(this.lanes, this.motion);
      if (size === toTick) this.tick();
    }
  }

  skip(lostSamples: number, estimated: boolean): boolean {
    const lost = wholeGap(lostSamples);
    if (lost === 0 || !Number.isSafeInteger(this.nextAt + lost)) return false;
    const fromS = this.nextAt / this.rateHz;
    this.nextAt += lost;
    const toS = this.nextAt / this.rateHz;
    for (const path of this.paths) path.skipTo(this.nextAt);
    mergeEdges(this.lanes, this.motion);
    this.motion.gap(fromS, toS, this.nextAt);
    const gap = { fromS, toS, lostSamples: lost, estimated };
    this.output.gaps.push(gap);
    this.desk.gap(gap);
    this.tap?.gap(this.motionNow());
    return true;
  }

  note(note: BoardNote): void {
    this.desk.note(note, this.nextAt / this.rateHz);
  }

  drain(): void {
    const { output } = this;
    for (const columns of output.edges) columns.count = 0;
    for (const columns of output.rejected) columns.count = 0;
    output.speed.count = 0;
    // Cutting a list costs as much as many samples, even where it is empty.
    if (output.directions.length > 0) output.directions.length = 0;
    if (output.bands.length > 0) output.bands.length = 0;
    if (output.gaps.length > 0) output.gaps.length = 0;
    if (output.closedFindings.length > 0) output.closedFindings.length = 0;
  }

  status(): PipelineStatus {
    const primary = this.roles.indexOf(0);
    const shaft = shaftStatus(this.motion, this.speedSettings, this.rateHz, this.indexWatch);
    return statusOf(this.motion, this.paths, primary, this.nextAt / this.rateHz, shaft, this.desk.open());
  }

  private tick(): void {
    for (const path of this.paths) path.tick();
    this.indexWatch?.tick();
    this.desk.tick(this.nextAt / this.rateHz);
    this.tap?.tick(this.motionNow());
  }

  motionNow(): MotionNow {
    const { calm, state } = this.motion;
    return { state, teeth: this.paths[this.roles.indexOf(0)]!.log.count, disturbances: calm.disturbances };
  }
}
