/** Turns the state of a rig into what viewers get: pure, called at most some tens of times a second. */
import type { Live, Ribbon, RibbonWish } from '@/server/contract';
import type { Channel, Filter, RigSetup } from '@/signal/model';
import type { PipelineStatus } from '@/signal/pipeline-types';
import { filteredColumns, takesLevelAway } from '@/server/hub/filtered-columns';
import type { LiveSignal } from '@/server/hub/live-signal';
import { markForward, markReverse, markRising } from '@/server/hub/live-signal';

/** No block for so long: the rig is silent and its speed is no longer said. */
export const silentAfterMs = 2000;

export type RigNow = {
  signal: LiveSignal | null;
  stream: string | null;
  /** Where the stream stands, s, and its rate: known before the signal path has seen a block of it. */
  streamS: number | null;
  rateHz: number | null;
  /** Wall clock of the newest block, ms; null before any. */
  lastBlockAtMs: number | null;
  arrivingHz: number | null;
  lookbackS: number;
  settingsVersion: number;
};

const iso = (ms: number) => new Date(ms).toISOString();

export function liveOf(now: RigNow, nowMs: number): Live {
  const { signal, lastBlockAtMs } = now;
  const status = signal?.status() ?? null;
  const silent = lastBlockAtMs !== null && nowMs - lastBlockAtMs >= silentAfterMs;
  const state = lastBlockAtMs === null ? 'waiting' : silent ? 'silent' : (status?.state ?? 'unknown');
  const speaks = !silent && status !== null;
  const streamS = signal === null ? now.streamS : signal.nextIndex / signal.rateHz;
  return {
    state,
    stream: now.stream,
    streamS,
    speedRpm: speaks ? status.speedRpm : null,
    speedErrorRpm: speaks ? status.speedErrorRpm : null,
    speedAtMostRpm: speaks ? status.speedAtMostRpm : null,
    direction: speaks ? status.direction : 'unknown',
    turns: status?.turns ?? null,
    turnsSince:
      status !== null && streamS !== null && lastBlockAtMs !== null
        ? iso(lastBlockAtMs - (streamS - status.countsSinceS) * 1000)
        : null,
    rates: {
      declaredHz: signal?.rateHz ?? now.rateHz,
      arrivingHz: silent ? 0 : now.arrivingHz,
      toothHz: speaks ? status.toothHz : null,
    },
    margin: speaks ? status.margin : null,
    findings: status?.findings ?? [],
    lookbackS: now.lookbackS,
    lastBlockAt: lastBlockAtMs === null ? null : iso(lastBlockAtMs),
    sinceLastEdgeS:
      status !== null && status.lastEdgeS !== null && streamS !== null
        ? Math.max(0, streamS - status.lastEdgeS)
        : null,
    pulses: status?.pulses ?? null,
    positions: status?.positions ?? null,
    synced: status?.synced ?? null,
    settingsVersion: now.settingsVersion,
    phaseDeg: speaks ? status.phaseDeg : null,
    delayS: speaks ? status.delayS : null,
    channels: status?.channels ?? [],
    shaft: speaks ? status.shaft : null,
    setupProblem: signal?.setupProblem ?? null,
  };
}

const defaultTeeth = 6;
const freeRunningS = 1;
/** Marks of one lane in a frame; above it they are thinned to one a column. */
const mostMarks = 500;

/** Stretch to draw: a number of teeth up to the last counted edge, or the newest seconds. */
function windowOf(
  signal: LiveSignal,
  status: PipelineStatus | null,
  wish: RibbonWish,
): { toS: number; spanS: number; anchor: 'edge' | 'now' } {
  const nowS = signal.nextIndex / signal.rateHz;
  const toothHz = status?.toothHz ?? null;
  const steady = status?.state === 'running' && toothHz !== null && toothHz > 0;
  const spanS = wish.spanS ?? (steady ? (wish.teeth ?? defaultTeeth) / toothHz : freeRunningS);
  if (wish.atS !== undefined) return { toS: wish.atS + spanS / 2, spanS, anchor: 'now' };
  if (wish.anchor === 'now' || !steady) return { toS: nowS, spanS, anchor: 'now' };
  const lastRising = signal.edges[signal.primary]
    ?.between(nowS - 4 / toothHz, nowS)
    .filter((e) => (e.flags & markRising) !== 0);
  const last = lastRising?.[lastRising.length - 1];
  return last === undefined ? { toS: nowS, spanS, anchor: 'now' } : { toS: last.t, spanS, anchor: 'edge' };
}

export function ribbonOf(
  signal: LiveSignal,
  setup: RigSetup,
  filter: Filter | Filter[],
  wish: RibbonWish,
): Ribbon {
  const status = signal.status();
  const { toS, spanS, anchor } = windowOf(signal, status, wish);
  const fromS = toS - spanS;
  const { rateHz } = signal;
  const filtered = signal.pipeline !== null && takesLevelAway(filter);
  // A window that free-runs keeps its columns on fixed sample groups, else the trace shimmers.
  const group = Math.max(1, Math.ceil((spanS * rateHz) / wish.columns));
  const firstIndex = Math.floor((fromS * rateHz) / group) * group;
  const count = Math.max(1, Math.ceil((toS * rateHz - firstIndex) / group) + 1);
  // Closer ones merge in the picture, and a minute of teeth would make a frame of megabytes.
  const marksApartS = signal.edges.some((edges) => edges.count(fromS, toS) > mostMarks)
    ? spanS / wish.columns
    : 0;
  const marks = (of: LiveSignal['edges']) =>
    of.flatMap((marksOfChannel, i) =>
      marksOfChannel
        .between(fromS, toS, marksApartS)
        .map((mark) => ({ channel: signal.channels[i] as string, ...mark })),
    );
  const columnsOf = (recent: LiveSignal['signals'][number] | undefined, channel: Channel | undefined) => {
    if (recent === undefined || channel === undefined) return { min: [], max: [] };
    return filtered
      ? filteredColumns(recent, channel, filter, rateHz, firstIndex, group, count)
      : recent.columns(firstIndex, group, count);
  };
  return {
    fromS,
    toS,
    anchor,
    signal: filtered ? 'filtered' : 'raw',
    firstS: (firstIndex + (group - 1) / 2) / rateHz,
    stepS: group / rateHz,
    lanes: signal.channels.map((name, i) => {
      const channel = setup.channels.find((c) => c.name === name);
      const state = status?.channels.find((c) => c.channel === name);
      const toVolts = (code: number | null | undefined) =>
        channel === undefined || code == null ? null : (code - channel.codeOffset) * channel.voltsPerCode;
      const rails = [toVolts(channel?.minCode), toVolts(channel?.maxCode)];
      const known = rails.filter((v) => v !== null);
      return {
        channel: name,
        ...columnsOf(signal.signals[i], channel),
        lowV: state?.lowV ?? null,
        highV: state?.highV ?? null,
        operateV: state?.operateV ?? null,
        releaseV: state?.releaseV ?? null,
        clipLowV: known.length === 2 && !filtered ? Math.min(...known) : null,
        clipHighV: known.length === 2 && !filtered ? Math.max(...known) : null,
      };
    }),
    edges: marks(signal.edges).map(({ channel, t, flags }) => ({
      channel,
      t,
      rising: (flags & markRising) !== 0,
      direction:
        (flags & markForward) !== 0 ? 'forward' : (flags & markReverse) !== 0 ? 'reverse' : 'unknown',
    })),
    edgeCounts: signal.channels.map((channel, i) => ({
      channel,
      edges: signal.edges[i]?.count(fromS, toS) ?? 0,
      rejected: signal.rejected[i]?.count(fromS, toS) ?? 0,
    })),
    rejected: marks(signal.rejected).map(({ channel, t }) => ({ channel, t })),
    gaps: signal.gaps
      .filter((g) => g.toS >= fromS && g.fromS <= toS)
      .map((g) => ({ from: g.fromS, to: g.toS, lostSamples: g.lostSamples, estimated: g.estimated })),
  };
}
