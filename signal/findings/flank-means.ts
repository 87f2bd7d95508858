/** How steep the flanks of some teeth are on average, and how much their instants scatter. */
import type { ChannelPath } from '@/signal/channel-path';
import { filtersOf } from '@/signal/findings/channel-finding';
import type { Settings } from '@/signal/model';
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

export type FlankMeans = {
  /** From 10 % to 90 % of the swing at the slope about mid, s. */
  riseS: number;
  fallS: number;
};

/** Of the teeth `first` up to, not with, `end` of the log. @param swingV their mean peak to peak. */
export function flankMeans(
  { log, operateV, releaseV }: ChannelPath,
  first: number,
  end: number,
  swingV: number,
): FlankMeans {
  let riseS = 0;
  let fallS = 0;
  for (let n = first; n < end; n++) {
    riseS += log.riseWayS[n & log.mask]!;
    fallS += log.fallWayS[n & log.mask]!;
  }
  const teeth = end - first;
  const halfBandV = (operateV - releaseV) / 2;
  const whole = (0.8 * swingV) / halfBandV / teeth;
  return { riseS: riseS * whole, fallS: fallS * whole };
}

/**
 * By how much rising edges scatter from one turn to the next, rms, s: half the rms of what the duration of a turn changes
 * by from one tooth to the next (four independent edges; with one tooth a turn it is three, one of them twice). Teeth that
 * stand off their places are the same in each turn, and a speed that changes slowly cancels.
 * @param turn teeth of one turn. NaN where the log does not hold one turn more than `first` to `end`.
 */
export function edgeScatterS(log: ToothLog, first: number, end: number, turn: number): number {
  if (first - turn < readableFrom(log, 0) || end - first < 2) return NaN;
  let squares = 0;
  let before = NaN;
  for (let n = first; n < end; n++) {
    const turnS = log.riseS[n & log.mask]! - log.riseS[(n - turn) & log.mask]!;
    if (n > first) squares += (turnS - before) ** 2;
    before = turnS;
  }
  return Math.sqrt(squares / (end - first - 1) / (turn === 1 ? 6 : 4));
}

/**
 * From 10 % to 90 % of a step behind the filter alone, s: 0.35 over the cutoff for each low pass, added as squares
 * (common practice of the trade; exact for one pole, where ln 9 / (2 pi) = 0.3497).
 */
export function filterRiseS(settings: Settings): number {
  let squares = 0;
  for (const filter of filtersOf(settings)) {
    const cutoffHz = upperEdgeHz(filter);
    if (cutoffHz < Infinity) squares += (0.35 / cutoffHz) ** 2;
  }
  return Math.sqrt(squares);
}

/** What the filter leaves of the band from 0 to half the rate, Hz. */
export function bandwidthHz(settings: Settings, rateHz: number): number {
  return Math.min(rateHz / 2, ...filtersOf(settings).map(upperEdgeHz));
}

function upperEdgeHz(filter: ReturnType<typeof filtersOf>[number]): number {
  if (filter.kind === 'lowpass') return filter.cutoffHz;
  return filter.kind === 'bandpass' ? filter.highHz : Infinity;
}
