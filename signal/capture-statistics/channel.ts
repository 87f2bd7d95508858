/** Statistics of one channel: levels, sine, transitions from a window of filtered samples; duty from the edges. */
import type { ChannelStatistics, SpreadOf } from '@/signal/capture-statistics/shapes';
import type { Stretch } from '@/signal/capture-statistics/stretch';
import type { Analysis } from '@/signal/model';
import { pulseStatistics, spreadOf } from '@/signal/statistics/pulse-statistics';
import { fitSineInPhase, type Sine } from '@/signal/statistics/sine-fit';
import { stateLevels } from '@/signal/statistics/state-levels';
import { toothPhase } from '@/signal/statistics/tooth-phase';
import { findTransitions } from '@/signal/statistics/transitions';

const fewestPeriods = 5;
/** Residual over amplitude up to which a signal is called near-sine. */
const sineResidual = 0.25;
/** A sine's levels are no states: transitions are given where they take less than this share of the half period. */
const longestTransition = 0.5;

export type ChannelWindow = { volts: Float64Array; startS: number; rateHz: number; noiseV: number | null };

type Edges = Analysis['channels'][string]['edges'];

/**
 * Volts, seconds and shares of 1 of one channel; null for each number that the samples cannot carry.
 * @param edges of the whole capture, s. @param stretch the seconds in which duty is taken. @param window filtered volts;
 * null: none was kept, and only the duty is told.
 */
export function channelStatistics(
  edges: Edges,
  stretch: Stretch,
  window: ChannelWindow | null,
): ChannelStatistics {
  const dutyFactor = dutyOf(edges, stretch);
  const none = {
    levels: null,
    sine: null,
    riseS: null,
    fallS: null,
    overshootPct: null,
    extraMidCrossings: null,
  };
  if (!window) return { ...none, dutyFactor };
  const { volts, startS, rateHz, noiseV } = window;
  const found = stateLevels(volts, { method: 'mode', bins: 100, ...(noiseV === null ? {} : { noiseV }) });
  const levels = found.ok ? found.value : null;
  const fit = sineOf(edges, window);
  const near = fit !== null && fit.sine.residualRmsV <= sineResidual * fit.sine.amplitudeV ? fit.sine : null;
  return {
    dutyFactor,
    levels: levels && { lowV: levels.lowV, highV: levels.highV, resolutionV: levels.resolutionV },
    sine: near && { amplitudeV: near.amplitudeV, offsetV: near.offsetV, residualRmsV: near.residualRmsV },
    ...transitionsOf(volts, startS, rateHz, levels, meanPeriodS(edges, window)),
  };
}

function dutyOf(edges: Edges, { from, to }: Stretch): SpreadOf | null {
  const own = edges.filter(({ midT }) => midT >= from && midT <= to);
  const pulses = pulseStatistics(
    own.map(({ midT }) => midT),
    own.map(({ rising }) => rising),
  );
  return pulses.ok ? pulses.value.duty : null;
}

/** The sine in tooth phase over the window, which follows a changing speed; with the phase of its samples. */
export function sineOf(
  edges: Edges,
  { volts, startS, rateHz }: ChannelWindow,
): { sine: Sine; from: number; to: number; psiRad: Float64Array } | null {
  const teethS = risesWithin(edges, startS, startS + volts.length / rateHz);
  if (teethS.length <= fewestPeriods) return null;
  const phase = toothPhase(teethS, startS, rateHz, volts.length);
  if (!phase.ok) return null;
  const { from, to, psiRad } = phase.value;
  const fit = fitSineInPhase(volts.subarray(from, to), psiRad);
  return fit.ok ? { sine: fit.value, from, to, psiRad } : null;
}

function risesWithin(edges: Edges, fromS: number, toS: number): number[] {
  const own: number[] = [];
  for (const { midT, rising } of edges) {
    if (midT > toS) break;
    if (rising && midT >= fromS) own.push(midT);
  }
  return own;
}

function meanPeriodS(edges: Edges, { volts, startS, rateHz }: ChannelWindow): number {
  const rises = risesWithin(edges, startS, startS + volts.length / rateHz);
  return rises.length > 1 ? (rises[rises.length - 1]! - rises[0]!) / (rises.length - 1) : NaN;
}

function transitionsOf(
  volts: Float64Array,
  startS: number,
  rateHz: number,
  levels: { lowV: number; highV: number } | null,
  periodS: number,
): Pick<ChannelStatistics, 'riseS' | 'fallS' | 'overshootPct' | 'extraMidCrossings'> {
  const none = { riseS: null, fallS: null, overshootPct: null, extraMidCrossings: null };
  const found = levels && findTransitions(volts, startS, rateHz, levels, 0.1);
  if (!found || !found.ok || found.value.transitions.length < 2) return none;
  const { transitions } = found.value;
  const rises = transitions.filter(({ rising }) => rising).map(({ durationS }) => durationS);
  const falls = transitions.filter(({ rising }) => !rising).map(({ durationS }) => durationS);
  if (rises.length === 0 || falls.length === 0) return none;
  const mean = (pick: (k: number) => number): number =>
    transitions.reduce((sum, _, k) => sum + pick(k), 0) / transitions.length;
  const riseS = spreadOf(rises);
  const fallS = spreadOf(falls);
  if (!(riseS.mean + fallS.mean < longestTransition * periodS)) return none;
  return {
    riseS,
    fallS,
    overshootPct: mean((k) => transitions[k]!.overshootPct),
    extraMidCrossings: mean((k) => transitions[k]!.extraMidCrossings),
  };
}
