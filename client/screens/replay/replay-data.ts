import type { Samples } from '@/server/contract';
import type { Analysis, Finding } from '@/signal/model';
import { directionAt } from '@/client/drawings/rail-marks';
import type { RailEdge } from '@/client/drawings/rail-marks';
import type { RibbonLane } from '@/client/drawings/ribbon-types';
import { centreOn, clampWindow, spanOf } from '@/client/screens/replay/replay-window';
import type { Window } from '@/client/screens/replay/replay-window';

type ChannelAnalysis = Analysis['channels'][string];
type Limits = { clipLowV: number | null; clipHighV: number | null };

/** Samples and analysis of one channel, as the ribbon draws them. */
export function laneOf(
  channel: string,
  samples: Samples | undefined,
  analysis: ChannelAnalysis | undefined,
  limits: Limits,
  window: Window,
): RibbonLane {
  const values = samples?.kind === 'raw' ? samples.v : undefined;
  const stepS = samples?.stepS ?? 1;
  // A column of extremes stands at the middle of its samples, a sample at its own instant.
  const firstS = (samples?.fromS ?? 0) + (values ? 0 : stepS / 2);
  return {
    channel,
    firstS,
    stepS,
    min: values ?? samples?.min ?? [],
    max: values ?? samples?.max ?? [],
    lowV: analysis?.lowV ?? null,
    highV: analysis?.highV ?? null,
    ...limits,
    bands: analysis ? bandsIn(analysis, window) : [],
  };
}

const mostBands = 160;

/** The band within a window as stretches, thinned to what a drawing can show. */
export function bandsIn(
  { band, operateV, releaseV }: Pick<ChannelAnalysis, 'band' | 'operateV' | 'releaseV'>,
  { fromS, toS }: Window,
): RibbonLane['bands'] {
  if (band.length === 0)
    return operateV === null || releaseV === null ? [] : [{ from: fromS, to: toS, operateV, releaseV }];
  const first = Math.max(0, firstAfter(band, fromS) - 1);
  const end = firstAfter(band, toS);
  const every = Math.max(1, Math.ceil((end - first) / mostBands));
  const stretches: { from: number; to: number; operateV: number; releaseV: number }[] = [];
  for (let i = first; i < end; i += every) {
    const entry = band[i]!;
    const to = i + every < end ? band[i + every]!.t : toS;
    stretches.push({
      from: Math.max(fromS, entry.t),
      to,
      operateV: entry.operateV,
      releaseV: entry.releaseV,
    });
  }
  return stretches;
}

/** All edges of a capture, sorted, each with the direction that held then. */
export function edgesOf(analysis: Analysis): RailEdge[] {
  return Object.entries(analysis.channels)
    .flatMap(([channel, { edges }]) =>
      edges.map(({ t, rising }) => ({ channel, t, rising, direction: directionAt(analysis.direction, t) })),
    )
    .sort((a, b) => a.t - b.t);
}

export function inWindow<T extends { t: number }>(sorted: readonly T[], { fromS, toS }: Window): T[] {
  return sorted.slice(firstAfter(sorted, fromS - 1e-9), firstAfter(sorted, toS));
}

/** A window's points and their neighbours outside, so that a line runs to its borders. */
export function aroundWindow<T extends { t: number }>(sorted: readonly T[], { fromS, toS }: Window): T[] {
  return sorted.slice(Math.max(0, firstAfter(sorted, fromS) - 1), firstAfter(sorted, toS) + 1);
}

/** Where to start: at the worst finding as `findingWindow` shows it, else at the beginning. */
export function firstWindow(analysis: Analysis, durationS: number): { window: Window; cursorS: number } {
  const rank = { fault: 0, warn: 1, note: 2 };
  const worst = [...analysis.findings].sort((a, b) => rank[a.severity] - rank[b.severity] || a.at - b.at)[0];
  const cursorS = Math.min(durationS, Math.max(0, worst?.at ?? 0));
  const whole = { fromS: 0, toS: durationS };
  const window = worst
    ? findingWindow(analysis, worst, whole, durationS)
    : centreOn({ fromS: 0, toS: teethSpan(analysis, null, 0, durationS) }, 0, durationS);
  return { window, cursorS };
}

/**
 * What shows a finding, `now` in sight before: a gap whole with signal at either side; a stretch of some teeth whole;
 * of a longer one about eight teeth around its instant. A picture that is closer already stays as close.
 */
export function findingWindow(
  analysis: Analysis,
  finding: Pick<Finding, 'at' | 'from' | 'to' | 'channel'>,
  now: Window,
  durationS: number,
): Window {
  const teethS = teethSpan(analysis, finding.channel, finding.at, durationS);
  const gap = analysis.gaps.find((g) => finding.at >= g.from - 1e-6 && finding.at <= g.to + 1e-6);
  if (gap) return about(gap.from, gap.to, Math.max(teethS, (gap.to - gap.from) * 1.5), durationS);
  const to = finding.to ?? Infinity;
  const short = to >= finding.from && to - finding.from <= 2 * teethS;
  const span = short ? Math.max(teethS, (to - finding.from) * 1.25) : teethS;
  if (span >= spanOf(now)) return centreOn(now, finding.at, durationS);
  return short ? about(finding.from, to, span, durationS) : about(finding.at, finding.at, span, durationS);
}

function about(from: number, to: number, span: number, durationS: number): Window {
  const fromS = (from + to - span) / 2;
  return clampWindow({ fromS, toS: fromS + span }, durationS, 0);
}

/** How long about eight teeth take near `at`, s; half a second where no tooth is counted. */
function teethSpan(analysis: Analysis, channel: string | null, at: number, durationS: number): number {
  const { channels } = analysis;
  const counted =
    (channels[channel ?? ''] ?? Object.values(channels)[0])?.edges.filter((e) => e.rising) ?? [];
  const i = firstAfter(counted, at);
  const near = counted.slice(Math.max(0, i - 8), i + 8);
  const periods = near
    .slice(1)
    .map((e, k) => e.t - near[k]!.t)
    .sort((a, b) => a - b);
  const usual = periods[periods.length >> 1];
  return Math.min(durationS, usual === undefined ? 0.5 : Math.min(8 * usual, 4));
}

/** Index of the first entry later than `t`. */
function firstAfter(sorted: readonly { t: number }[], t: number): number {
  let low = 0;
  let high = sorted.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (sorted[middle]!.t <= t) low = middle + 1;
    else high = middle;
  }
  return low;
}
