/**
 * The door of the signal path: what a rig and its settings must satisfy before a pipeline can be built from them.
 * The API's routes ask the same question when settings are saved, then mostly without a rate.
 */
import type { Filter, RigSetup, Settings } from '@/signal/model';
import type { SetupIssue } from '@/signal/pipeline-types';

/**
 * The first thing that is wrong, or null.
 * @param rateHz samples per second, or null where no board has told it yet: cutoffs are then only checked for sign.
 * @param channels names of the channels present, or null for all of the rig's.
 */
export function validateSetup(
  rig: RigSetup,
  settings: Settings,
  rateHz: number | null,
  channels: readonly string[] | null,
): SetupIssue | null {
  return (
    rateIssue(rateHz) ??
    wheelIssue(rig) ??
    channelIssue(rig, channels) ??
    filterIssues(settings, rateHz) ??
    bandIssue(rig, settings) ??
    timingIssue(settings)
  );
}

function rateIssue(rateHz: number | null): SetupIssue | null {
  if (rateHz === null || (rateHz >= 1 && rateHz <= 1_000_000)) return null;
  return {
    code: 'bad-rate',
    pointer: '/rateHz',
    detail: `A sample rate of ${rateHz} Hz is outside 1 Hz to 1 MHz.`,
  };
}

function wheelIssue({ wheel }: RigSetup): SetupIssue | null {
  const { pulsesPerTurn, missingPulses, gearRatio } = wheel;
  if (!Number.isInteger(pulsesPerTurn) || pulsesPerTurn < 1) {
    return {
      code: 'no-pulses',
      pointer: '/wheel/pulsesPerTurn',
      detail: 'A wheel needs at least one pulse a turn, in whole numbers.',
    };
  }
  if (
    !Number.isInteger(missingPulses) ||
    missingPulses < 0 ||
    (missingPulses > 0 && pulsesPerTurn - missingPulses < 2)
  ) {
    return {
      code: 'too-many-missing',
      pointer: '/wheel/missingPulses',
      detail: `${missingPulses} missing of ${pulsesPerTurn} positions leaves fewer than two teeth to tell the gap by.`,
    };
  }
  if (!Number.isFinite(gearRatio) || gearRatio <= 0) {
    return { code: 'bad-gear', pointer: '/wheel/gearRatio', detail: 'The gear ratio must be above 0.' };
  }
  return null;
}

function channelIssue(rig: RigSetup, channels: readonly string[] | null): SetupIssue | null {
  const present = channels ?? rig.channels.map(({ name }) => name);
  for (const name of present) {
    const channel = rig.channels.find((candidate) => candidate.name === name);
    if (!channel)
      return { code: 'channel-missing', pointer: '/channels', detail: `The rig has no channel "${name}".` };
    const { voltsPerCode, codeOffset } = channel;
    if (!Number.isFinite(voltsPerCode) || voltsPerCode === 0 || !Number.isFinite(codeOffset)) {
      return {
        code: 'channel-missing',
        pointer: `/channels/${rig.channels.indexOf(channel)}/voltsPerCode`,
        detail: `Channel "${name}" has no usable scale from codes to volts.`,
      };
    }
  }
  for (const role of neededRoles(rig)) {
    if (rig.channels.some((channel) => channel.role === role && present.includes(channel.name))) continue;
    return {
      code: 'channel-missing',
      pointer: '/channels',
      detail: `${rig.sensing} sensing needs a channel with the role ${role}.`,
    };
  }
  return null;
}

/** Roles without which the arrangement tells nothing. */
export function neededRoles(rig: Pick<RigSetup, 'sensing'>): readonly ('A' | 'B' | 'U' | 'V' | 'W')[] {
  switch (rig.sensing) {
    case 'single':
    case 'width-coded':
      return ['A'];
    case 'quadrature':
      return ['A', 'B'];
    case 'three-hall':
      return ['U', 'V', 'W'];
  }
}

function filterIssues(settings: Settings, rateHz: number | null): SetupIssue | null {
  const list = Array.isArray(settings.filter) ? settings.filter : [settings.filter];
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

function bandIssue(rig: RigSetup, { band }: Settings): SetupIssue | null {
  if (band.mode === 'fixed') {
    if (!(band.operateV > band.releaseV)) return inverted('/band');
    for (const [name, levels] of Object.entries(band.channels ?? {})) {
      if (!rig.channels.some((channel) => channel.name === name)) {
        return {
          code: 'band-channel-unknown',
          pointer: `/band/channels/${name}`,
          detail: `The rig has no channel "${name}".`,
        };
      }
      if (!(levels.operateV > levels.releaseV)) return inverted(`/band/channels/${name}`);
    }
    return null;
  }
  const { operateFraction, releaseFraction } = band;
  if (!(operateFraction > releaseFraction)) return inverted('/band');
  if (operateFraction < 1 && releaseFraction > 0) return null;
  return { code: 'band-inverted', pointer: '/band', detail: 'Fractions of the swing lie between 0 and 1.' };
}

function inverted(pointer: string): SetupIssue {
  return { code: 'band-inverted', pointer, detail: 'The operate point must be above the release point.' };
}

function timingIssue({ holdoffS, speed }: Settings): SetupIssue | null {
  if (!Number.isFinite(holdoffS) || holdoffS < 0) {
    return { code: 'bad-holdoff', pointer: '/holdoffS', detail: 'The hold-off must be 0 s or more.' };
  }
  if (!['tooth', 'turn', 'window'].includes(speed.method)) {
    return { code: 'bad-speed', pointer: '/speed/method', detail: 'The method is tooth, turn or window.' };
  }
  if (!Number.isFinite(speed.windowS) || speed.windowS <= 0) {
    return { code: 'bad-speed', pointer: '/speed/windowS', detail: 'The window must be longer than 0 s.' };
  }
  if (!Number.isFinite(speed.stoppedAfterS) || speed.stoppedAfterS <= 0) {
    return {
      code: 'bad-speed',
      pointer: '/speed/stoppedAfterS',
      detail: 'The time until stopped must be longer than 0 s.',
    };
  }
  return null;
}
