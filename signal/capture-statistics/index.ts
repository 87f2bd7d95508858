/** Statistics of a whole capture, made once its last sample has gone through the signal path. */
import { channelStatistics, sineOf } from '@/signal/capture-statistics/channel';
import type { ChannelWindow } from '@/signal/capture-statistics/channel';
import type { CaptureStatistics } from '@/signal/capture-statistics/shapes';
import { flanksWithin, longestStretch } from '@/signal/capture-statistics/stretch';
import { speedOrders, strongest, toothJitter, turnSpeeds } from '@/signal/capture-statistics/teeth';
import { wheelTurns } from '@/signal/capture-statistics/wheel-turns';
import type { SampleWindow } from '@/signal/capture-statistics/window';
import type { Analysis, RigSetup } from '@/signal/model';
import type { PipelineStatus } from '@/signal/pipeline-types';
import { orderSpectrum } from '@/signal/statistics/order-spectrum';
import { fitSineInPhase } from '@/signal/statistics/sine-fit';
import { compareSines } from '@/signal/statistics/sine-pair';

export type StatisticsSource = {
  rig: RigSetup;
  rateHz: number;
  /** Names of the channels, in the order of the window's columns. */
  names: readonly string[];
  channels: Analysis['channels'];
  speed: Analysis['speed'];
  status: PipelineStatus;
  window: SampleWindow | null;
};

/** Null where the shaft never turned long enough for a speed. */
export function captureStatistics(source: StatisticsSource): CaptureStatistics | null {
  const { rig, names, channels, speed, status } = source;
  const stretch = longestStretch(speed);
  if (!stretch) return null;
  const windowOf = (index: number): ChannelWindow | null => {
    const { window, rateHz } = source;
    if (!window) return null;
    // The filter's delay is taken off the edges, and so off the samples that are set beside them.
    const startS = window.startIndex / rateHz - status.delayS;
    return { volts: window.volts[index]!, startS, rateHz, noiseV: status.channels[index]!.noiseV };
  };
  const first = names.findIndex((name) => /^[AU]$/.test(roleOf(rig, name)));
  const teethS = flanksWithin(channels[names[first]!]?.edges ?? [], stretch, true);
  const turns = wheelTurns(teethS, rig.wheel);
  const reverse = (speed.find(({ t }) => t === stretch.to)?.rpm ?? 0) < 0;
  return {
    ...stretch,
    channels: Object.fromEntries(
      names.map((name, index) => [name, channelStatistics(channels[name]!.edges, stretch, windowOf(index))]),
    ),
    jitter: toothJitter(teethS, turns, rig.wheel),
    turns: turnSpeeds(turns, rig.wheel.gearRatio, reverse ? -1 : 1),
    speedOrders: speedOrders(turns, rig.wheel),
    swingOrders: swingOrders(status),
    pair: rig.sensing === 'quadrature' ? pairOf(source, windowOf, reverse) : null,
  };
}

function roleOf(rig: RigSetup, name: string): string {
  return rig.channels.find((channel) => channel.name === name)?.role ?? 'aux';
}

function swingOrders({ wheelFace }: PipelineStatus): CaptureStatistics['swingOrders'] {
  if (!wheelFace) return null;
  const values = wheelFace.positions.map(({ swingV }) => swingV ?? NaN);
  const spectrum = orderSpectrum(values, values.length);
  return spectrum.ok ? { meanV: spectrum.value.mean, lines: strongest(spectrum.value) } : null;
}

/** A and B fitted in one and the same phase, that of A's teeth. */
function pairOf(
  { rig, names, channels }: StatisticsSource,
  windowOf: (index: number) => ChannelWindow | null,
  reverse: boolean,
): CaptureStatistics['pair'] {
  const a = names.findIndex((name) => roleOf(rig, name) === 'A');
  const b = names.findIndex((name) => roleOf(rig, name) === 'B');
  const own = a >= 0 && b >= 0 ? windowOf(a) : null;
  const other = own && windowOf(b);
  const fit = own && sineOf(channels[names[a]!]!.edges, own);
  if (!fit || !other) return null;
  const second = fitSineInPhase(other.volts.subarray(fit.from, fit.to), fit.psiRad);
  if (!second.ok) return null;
  const { gainRatio, phaseDeg, phaseErrorDeg, phaseDegError } = compareSines(
    fit.sine,
    second.value,
    reverse ? 'reverse' : 'forward',
  );
  return { gainRatio, phaseDeg, phaseErrorDeg, standardErrorDeg: phaseDegError };
}
