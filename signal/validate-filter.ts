/** What of the filters cannot be designed at a sample rate. */
import type { Filter, Settings } from '@/signal/model';
import type { SetupIssue } from '@/signal/pipeline-types';

const mostFilters = 16;

/**
 * The first thing that is wrong with the filters, or null; `pointer` names the filter where there are several.
 * @param rateHz samples a second; null: not known, and cutoffs are held against nothing but 0.
 */
export function filterIssues(settings: Settings, rateHz: number | null): SetupIssue | null {
  const list = Array.isArray(settings.filter) ? settings.filter : [settings.filter];
  if (list.length > mostFilters) {
    return {
      code: 'bad-filter',
      pointer: '/filter',
      detail: `${list.length} filters in a row are more than ${mostFilters}.`,
    };
  }
  for (const [index, filter] of list.entries()) {
    const issue = filterIssue(
      filter,
      Array.isArray(settings.filter) ? `/filter/${index}` : '/filter',
      rateHz,
    );
    if (issue) return issue;
  }
  return null;
}

function filterIssue(filter: Filter, at: string, rateHz: number | null): SetupIssue | null {
  if (filter.kind === 'none') return null;
  if (!['lowpass', 'highpass', 'bandpass', 'notch'].includes(filter.kind))
    return { code: 'bad-filter', pointer: `${at}/kind`, detail: 'There is no such kind of filter.' };
  if (![2, 4, 6, 8].includes(filter.order))
    return { code: 'bad-filter', pointer: `${at}/order`, detail: 'The order is 2, 4, 6 or 8.' };
  if ('cutoffHz' in filter) {
    if (filter.family !== 'butterworth' && filter.family !== 'bessel') {
      return { code: 'bad-filter', pointer: `${at}/family`, detail: 'The family is butterworth or bessel.' };
    }
    return edgeIssue(filter.cutoffHz, `${at}/cutoffHz`, rateHz);
  }
  if (filter.family !== 'butterworth')
    return { code: 'bad-filter', pointer: `${at}/family`, detail: 'Band filters are Butterworth.' };
  const issue =
    edgeIssue(filter.lowHz, `${at}/lowHz`, rateHz) ?? edgeIssue(filter.highHz, `${at}/highHz`, rateHz);
  if (issue) return issue;
  if (filter.lowHz < filter.highHz) return null;
  return {
    code: 'bad-filter',
    pointer: `${at}/highHz`,
    detail: `The upper edge, ${filter.highHz} Hz, must be above the lower, ${filter.lowHz} Hz.`,
  };
}

/** Below a ten-millionth of the rate the poles run into the unit circle in float64. */
const lowestShareOfRate = 1e-7;

function edgeIssue(hz: number, pointer: string, rateHz: number | null): SetupIssue | null {
  if (!Number.isFinite(hz) || hz <= 0)
    return { code: 'cutoff-not-positive', pointer, detail: 'A cutoff must be above 0 Hz.' };
  if (rateHz === null) return null;
  if (hz >= rateHz / 2) {
    return {
      code: 'cutoff-above-nyquist',
      pointer,
      detail: `${hz} Hz is not below half the sample rate (${rateHz / 2} Hz).`,
    };
  }
  if (hz < rateHz * lowestShareOfRate) {
    return {
      code: 'bad-filter',
      pointer,
      detail: `${hz} Hz is too low for ${rateHz} samples a second: at least ${rateHz * lowestShareOfRate} Hz.`,
    };
  }
  return null;
}
