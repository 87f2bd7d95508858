/** What of a band cannot work: turned round, for a channel that is not there, or where its channel never comes. */
import type { BandLevels, Channel, Filter, RigSetup, Settings } from '@/signal/model';
import type { SetupIssue } from '@/signal/pipeline-types';
import { neededRoles } from '@/signal/validate-rig';

/**
 * @param againstRange whether a fixed band is held against the volts that a channel's codes span. @param channels names of the
 * channels present, or null for all.
 */
export function bandIssue(
  rig: RigSetup,
  { band, filter }: Settings,
  againstRange: boolean,
  channels: readonly string[] | null,
): SetupIssue | null {
  if (band.mode === 'fixed') {
    const issue = levelsIssue(band, '/band');
    if (issue) return issue;
    for (const [name, levels] of Object.entries(band.channels ?? {})) {
      const pointer = `/band/channels/${name}`;
      if (!rig.channels.some((channel) => channel.name === name))
        return { code: 'band-channel-unknown', pointer, detail: `The rig has no channel "${name}".` };
      const own = levelsIssue(levels, pointer);
      if (own) return own;
    }
    if (!againstRange) return null;
    const needed: readonly string[] = neededRoles(rig);
    for (const channel of rig.channels) {
      if (!needed.includes(channel.role) || (channels && !channels.includes(channel.name))) continue;
      const own = band.channels?.[channel.name];
      const outside = rangeIssue(
        channel,
        own ?? band,
        own ? `/band/channels/${channel.name}` : '/band',
        filter,
      );
      if (outside) return outside;
    }
    return null;
  }
  if (band.mode !== 'fitted')
    return { code: 'bad-band', pointer: '/band/mode', detail: 'The band is fixed or fitted.' };
  const { operateFraction, releaseFraction } = band;
  if (!(operateFraction > releaseFraction)) return inverted('/band');
  if (operateFraction < 1 && releaseFraction > 0) return null;
  return { code: 'band-inverted', pointer: '/band', detail: 'Fractions of the swing lie between 0 and 1.' };
}

function levelsIssue({ operateV, releaseV }: BandLevels, pointer: string): SetupIssue | null {
  const bad = (key: string, name: string): SetupIssue => ({
    code: 'bad-number',
    pointer: `${pointer}/${key}`,
    detail: `The ${name} point must be a number of volts.`,
  });
  if (!Number.isFinite(operateV)) return bad('operateV', 'operate');
  if (!Number.isFinite(releaseV)) return bad('releaseV', 'release');
  return operateV > releaseV ? null : inverted(pointer);
}

function inverted(pointer: string): SetupIssue {
  return { code: 'band-inverted', pointer, detail: 'The operate point must be above the release point.' };
}

/** A filter rings beyond the range by no more than this share of it. */
const overshoot = 0.25;

/** A band that the signal can never leave upwards, or never come back through. */
function rangeIssue(
  { name, voltsPerCode, codeOffset, minCode, maxCode }: Channel,
  { operateV, releaseV }: BandLevels,
  pointer: string,
  filter: Filter | Filter[],
): SetupIssue | null {
  if (minCode === null || maxCode === null) return null;
  const ends = [(minCode - codeOffset) * voltsPerCode, (maxCode - codeOffset) * voltsPerCode];
  const spanV = Math.abs(ends[1]! - ends[0]!);
  const kinds = (Array.isArray(filter) ? filter : [filter]).map(({ kind }) => kind);
  const isFiltered = kinds.some((kind) => kind !== 'none');
  // Without its steady part the signal swings about 0 V.
  const isCentred = kinds.some((kind) => kind === 'highpass' || kind === 'bandpass');
  const beyondV = isFiltered ? overshoot * spanV : 0;
  const lowV = (isCentred ? -spanV : Math.min(...ends)) - beyondV;
  const highV = (isCentred ? spanV : Math.max(...ends)) + beyondV;
  const range = `(${volts(lowV)} to ${volts(highV)} V)`;
  if (operateV >= highV) {
    return {
      code: 'band-outside',
      pointer: `${pointer}/operateV`,
      detail: `The operate point, ${volts(operateV)} V, is above all that channel ${name} can show ${range}.`,
    };
  }
  if (releaseV <= lowV) {
    return {
      code: 'band-outside',
      pointer: `${pointer}/releaseV`,
      detail: `The release point, ${volts(releaseV)} V, is below all that channel ${name} can show ${range}.`,
    };
  }
  return null;
}

function volts(value: number): string {
  return String(Number(value.toPrecision(4)));
}
