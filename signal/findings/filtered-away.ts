/** What the filter leaves of a tone that the raw signal shows, and which of several filters it is. */
import type { ChannelPath } from '@/signal/channel-path';
import { filtersOf } from '@/signal/findings/channel-finding';
import { foldedHz } from '@/signal/findings/tone-place';
import { short } from '@/signal/finding-words/values';
import { designFilters } from '@/signal/filter-design';
import type { Filter, Settings } from '@/signal/model';
import { responseAt } from '@/signal/response';
import type { SlowRing } from '@/signal/slow-ring';
import { readableFrom } from '@/signal/tooth-log';

/** Teeth of the last stretch against the raw tone: bins, and share of it. */
const sameBins = 1;
const sameShare = 0.01;
const teethNeeded = 8;
/** Narrow teeth show best at a multiple. */
const harmonics = 3;

/** Peak to peak of the last `seconds` of a ring, V; 0 where it holds nothing. */
export function spreadOfRing({ v, mask, count, unbrokenFrom, rateHz }: SlowRing, seconds: number): number {
  let low = Infinity;
  let high = -Infinity;
  for (let n = Math.max(unbrokenFrom, count - Math.round(seconds * rateHz), 0); n < count; n++) {
    const x = v[n & mask]!;
    if (x < low) low = x;
    if (x > high) high = x;
  }
  return high > low ? high - low : 0;
}

/** Whether that is less than `leastV`: where it is not, a few samples tell. */
export function spreadsLess(ring: SlowRing, seconds: number, leastV: number): boolean {
  const { v, mask, count, unbrokenFrom, rateHz } = ring;
  let low = Infinity;
  let high = -Infinity;
  for (let n = Math.max(unbrokenFrom, count - Math.round(seconds * rateHz), 0); n < count; n++) {
    const x = v[n & mask]!;
    if (x < low) low = x;
    if (x > high) high = x;
    if (high - low >= leastV) return false;
  }
  return (high > low ? high - low : 0) < leastV;
}

/**
 * True where the edges that come are those of a tone at `hz`, or where that is not known (NaN), at `ringHz` of a ring of
 * `rateHz` samples a second, over the time that it was seen in.
 */
export function countsTone(
  { log }: ChannelPath,
  hz: number,
  tone: { hz: number; binHz: number },
  rateHz: number,
  nowS: number,
): boolean {
  const last = log.count - 1;
  const lastS = log.riseS[last & log.mask]!;
  const oldest = readableFrom(log, 0);
  let first = last;
  while (first > oldest && log.riseS[first & log.mask]! > nowS - 1 / tone.binHz) first--;
  if (last - first < teethNeeded) return false;
  const toothHz = (last - first) / (lastS - log.riseS[first & log.mask]!);
  if (nowS - lastS > 4 / toothHz) return false;
  const is = (found: number, asked: number): boolean =>
    Math.abs(found - asked) < sameBins * tone.binHz + sameShare * found;
  if (is(foldedHz(toothHz, rateHz), tone.hz)) return true;
  for (let h = 2; h <= harmonics; h++) if (is(h * toothHz, hz)) return true;
  return false;
}

/** Names the one that takes most of `hz` away, or all of them where that is not known (NaN). */
export function filterName(settings: Settings, hz: number, rateHz: number): string {
  const filters = filtersOf(settings).filter(({ kind }) => kind !== 'none');
  if (Number.isNaN(hz)) return filters.map(nameOf).join(' and ');
  const gainOf = (one: Filter): number => responseAt(designFilters(one, rateHz), hz, rateHz).magnitude;
  return nameOf(filters.reduce((worst, one) => (gainOf(one) < gainOf(worst) ? one : worst)));
}

function nameOf(filter: Filter): string {
  switch (filter.kind) {
    case 'none':
      return 'no filter';
    case 'lowpass':
      return `low pass of ${short(filter.cutoffHz)} Hz`;
    case 'highpass':
      return `high pass of ${short(filter.cutoffHz)} Hz`;
    case 'bandpass':
      return `band pass of ${short(filter.lowHz)} to ${short(filter.highHz)} Hz`;
    default:
      return `notch of ${short(filter.lowHz)} to ${short(filter.highHz)} Hz`;
  }
}
