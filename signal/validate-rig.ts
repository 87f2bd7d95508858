/** What of a rig the signal path cannot work with: its wheel, its numbers, its channels. */
import type { Channel, ChannelRole, RigSetup } from '@/signal/model';
import type { SetupIssue } from '@/signal/pipeline-types';
import { neededRateHz } from '@/signal/statistics/width-code';

/** Far beyond any wheel; numbers beyond it would only eat memory. */
const mostPulses = 1_000_000;
const widestGear = 1e6;

type WheelSetup = Pick<RigSetup, 'sensing' | 'wheel'>;

/** The first thing about a wheel that the signal path cannot work with, or null: its numbers, then its widths. */
export function wheelIssue(rig: WheelSetup): SetupIssue | null {
  return turnIssue(rig) ?? widthIssue(rig);
}

/** As `wheelIssue`, without the widths: whether its pulses, gap and gear make a turn that speed can be told by. */
export function turnIssue(rig: WheelSetup): SetupIssue | null {
  const { pulsesPerTurn, gearRatio } = rig.wheel;
  if (!Number.isInteger(pulsesPerTurn) || pulsesPerTurn < 1) {
    return {
      code: 'no-pulses',
      pointer: '/wheel/pulsesPerTurn',
      detail: 'A wheel needs at least one pulse a turn, in whole numbers.',
    };
  }
  if (pulsesPerTurn > mostPulses) {
    return {
      code: 'too-many-pulses',
      pointer: '/wheel/pulsesPerTurn',
      detail: `${pulsesPerTurn} pulses a turn are more than ${mostPulses}, which is all that can be followed.`,
    };
  }
  const gap = gapIssue(rig);
  if (gap) return gap;
  if (!(gearRatio >= 1 / widestGear && gearRatio <= widestGear)) {
    return { code: 'bad-gear', pointer: '/wheel/gearRatio', detail: 'The gear ratio must be above 0.' };
  }
  return null;
}

function gapIssue({ sensing, wheel: { pulsesPerTurn, missingPulses } }: WheelSetup): SetupIssue | null {
  const pointer = '/wheel/missingPulses';
  if (
    !Number.isInteger(missingPulses) ||
    missingPulses < 0 ||
    (missingPulses > 0 && pulsesPerTurn - missingPulses < 2)
  ) {
    return {
      code: 'too-many-missing',
      pointer,
      detail: `${missingPulses} missing of ${pulsesPerTurn} positions leaves fewer than two teeth to tell the gap by.`,
    };
  }
  if (missingPulses > 0 && sensing === 'three-hall') {
    return {
      code: 'gap-not-followed',
      pointer,
      detail: 'A three-Hall set counts pole pairs, none of which can be missing.',
    };
  }
  return null;
}

/** What is wrong with the widths of a width-coded wheel, or null; null for every other arrangement. */
export function widthIssue({ sensing, wheel: { widthClasses } }: WheelSetup): SetupIssue | null {
  if (sensing !== 'width-coded') return null;
  const pointer = '/wheel/widthClasses';
  if (!widthClasses || widthClasses.length === 0) {
    return {
      code: 'no-widths',
      pointer,
      detail: 'Width-coded sensing needs the widths of its pulses, and what each of them means.',
    };
  }
  const bad = widthClasses.findIndex(({ widthS }) => !(widthS > 0 && Number.isFinite(widthS)));
  if (bad >= 0) {
    return { code: 'bad-widths', pointer: `${pointer}/${bad}/widthS`, detail: 'A width is above 0 s.' };
  }
  const unknown = widthClasses.findIndex(({ means }) => !['forward', 'reverse', 'weak'].includes(means));
  if (unknown >= 0) {
    return {
      code: 'bad-widths',
      pointer: `${pointer}/${unknown}/means`,
      detail: 'A width means forward, reverse or weak.',
    };
  }
  const needed = neededRateHz(widthClasses);
  if (needed.ok) return null;
  return {
    code: 'bad-widths',
    pointer,
    detail: `Widths must lie a quarter apart to be told from each other: ${needed.issue.detail}.`,
  };
}

/** Numbers that may be left out, but not be NaN or infinite. */
export function rigNumberIssue(rig: RigSetup): SetupIssue | null {
  const bad = (pointer: string, name: string): SetupIssue => ({
    code: 'bad-number',
    pointer,
    detail: `${name} must be a number, or be left out.`,
  });
  const isBad = (value: number | null): boolean => value !== null && !Number.isFinite(value);
  if (isBad(rig.ratedRpm)) return bad('/ratedRpm', 'The rated speed');
  for (const [i, { name, sensor, minCode, maxCode, maxInputV }] of rig.channels.entries()) {
    const at = `/channels/${i}`;
    const { supplyV, quiescentV, sensitivityMvPerMt, operateMt, releaseMt } = sensor;
    const own = { minCode, maxCode, maxInputV };
    for (const [key, value] of Object.entries(own))
      if (isBad(value)) return bad(`${at}/${key}`, `The ${key} of channel ${name}`);
    const ofSensor = { supplyV, quiescentV, sensitivityMvPerMt, operateMt, releaseMt };
    for (const [key, value] of Object.entries(ofSensor))
      if (isBad(value)) return bad(`${at}/sensor/${key}`, `The ${key} of the sensor of channel ${name}`);
    if (minCode !== null && maxCode !== null && minCode >= maxCode) {
      return {
        code: 'bad-codes',
        pointer: `${at}/maxCode`,
        detail: `The highest code of channel ${name}, ${maxCode}, must be above the lowest, ${minCode}.`,
      };
    }
  }
  return null;
}

/** Volts stay far from the ends of what a number can be. */
const mostVoltsPerCode = 1e9;

/**
 * The first thing that is wrong with the channels: a name that the rig does not have, a scale without use, a role that is
 * missing or there twice.
 * @param channels names of those present; null: all of the rig's.
 */
export function channelIssue(rig: RigSetup, channels: readonly string[] | null): SetupIssue | null {
  const present = channels ?? rig.channels.map(({ name }) => name);
  const found: Channel[] = [];
  for (const name of present) {
    const channel = rig.channels.find((candidate) => candidate.name === name);
    if (!channel)
      return { code: 'channel-missing', pointer: '/channels', detail: `The rig has no channel "${name}".` };
    const at = `/channels/${rig.channels.indexOf(channel)}`;
    if (found.includes(channel))
      return { code: 'channel-twice', pointer: `${at}/name`, detail: `Channel "${name}" is there twice.` };
    found.push(channel);
    const voltsPerCode = Math.abs(channel.voltsPerCode);
    if (!(voltsPerCode >= 1 / mostVoltsPerCode && voltsPerCode <= mostVoltsPerCode)) {
      return {
        code: 'bad-scale',
        pointer: `${at}/voltsPerCode`,
        detail: `Channel "${name}" has no usable scale from codes to volts.`,
      };
    }
    if (!Number.isSafeInteger(Math.round(channel.codeOffset))) {
      return {
        code: 'bad-scale',
        pointer: `${at}/codeOffset`,
        detail: `Channel "${name}" has no usable code for 0 V.`,
      };
    }
  }
  for (const role of neededRoles(rig)) {
    if (found.some((channel) => channel.role === role)) continue;
    return {
      code: 'channel-missing',
      pointer: '/channels',
      detail: `The rig's sensing, ${rig.sensing}, needs a channel with the role ${role}.`,
    };
  }
  return twiceIssue(rig, found);
}

/** Two channels with one place in the arrangement, or two indexes: which one is meant cannot be known. */
function twiceIssue(rig: RigSetup, found: readonly Channel[]): SetupIssue | null {
  const roles: ChannelRole[] = [...neededRoles(rig), 'Z'];
  for (const role of roles) {
    const second = found.filter((channel) => channel.role === role)[1];
    if (!second) continue;
    return {
      code: 'role-twice',
      pointer: `/channels/${rig.channels.indexOf(second)}/role`,
      detail: `Channel "${second.name}" has the role ${role}, which another channel has already.`,
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
