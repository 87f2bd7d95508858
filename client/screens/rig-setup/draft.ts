import type { Rig, RigInput } from '@/server/contract';
import type { Channel, ChannelRole, Sensing, SensorKind } from '@/signal/model';

/** A number as typed; empty means none. */
type Typed = string;

export type ChannelDraft = {
  name: string;
  role: ChannelRole;
  voltsPerCode: Typed;
  codeOffset: Typed;
  minCode: Typed;
  maxCode: Typed;
  maxInputV: Typed;
  /** Help for the four above; not part of the rig. */
  adcBits: Typed;
  adcReferenceV: Typed;
  sensor: {
    kind: SensorKind;
    supplyV: Typed;
    quiescentV: Typed;
    sensitivityMvPerMt: Typed;
    activeLow: boolean;
    operateMt: Typed;
    releaseMt: Typed;
  };
};

/** What the form holds: the rig's shape with numbers as typed, so that errors find their fields by path. */
export type RigDraft = {
  name: string;
  sensing: Sensing;
  wheel: {
    pulsesPerTurn: Typed;
    missingPulses: Typed;
    gearRatio: Typed;
    widthClasses: { widthUs: Typed; means: 'forward' | 'reverse' | 'weak' }[];
  };
  channels: ChannelDraft[];
  expectedDirection: 'forward' | 'reverse' | 'either';
  ratedRpm: Typed;
  /** For the consequences only: the board says its rate itself. */
  sampleRateHz: Typed;
};

export function emptyChannel(name: string, role: ChannelRole): ChannelDraft {
  return {
    name,
    role,
    voltsPerCode: '1',
    codeOffset: '0',
    minCode: '',
    maxCode: '',
    maxInputV: '3.3',
    adcBits: '',
    adcReferenceV: '',
    sensor: {
      kind: 'linear',
      supplyV: '3.3',
      quiescentV: '',
      sensitivityMvPerMt: '',
      activeLow: false,
      operateMt: '',
      releaseMt: '',
    },
  };
}

export const emptyDraft: RigDraft = {
  name: '',
  sensing: 'single',
  wheel: { pulsesPerTurn: '', missingPulses: '0', gearRatio: '1', widthClasses: [] },
  channels: [emptyChannel('A', 'A')],
  expectedDirection: 'either',
  ratedRpm: '',
  sampleRateHz: '20000',
};

export function draftOfRig(rig: Rig): RigDraft {
  const { wheel } = rig;
  return {
    name: rig.name,
    sensing: rig.sensing,
    wheel: {
      pulsesPerTurn: typed(wheel.pulsesPerTurn),
      missingPulses: typed(wheel.missingPulses),
      gearRatio: typed(wheel.gearRatio),
      widthClasses: (wheel.widthClasses ?? []).map((c) => ({
        widthUs: typed(round(c.widthS * 1e6)),
        means: c.means,
      })),
    },
    channels: rig.channels.map(draftOfChannel),
    expectedDirection: rig.expectedDirection ?? 'either',
    ratedRpm: typed(rig.ratedRpm),
    sampleRateHz: emptyDraft.sampleRateHz,
  };
}

function draftOfChannel(channel: Channel): ChannelDraft {
  const { sensor } = channel;
  return {
    name: channel.name,
    role: channel.role,
    voltsPerCode: typed(channel.voltsPerCode),
    codeOffset: typed(channel.codeOffset),
    minCode: typed(channel.minCode),
    maxCode: typed(channel.maxCode),
    maxInputV: typed(channel.maxInputV),
    adcBits: '',
    adcReferenceV: '',
    sensor: {
      kind: sensor.kind,
      supplyV: typed(sensor.supplyV),
      quiescentV: typed(sensor.quiescentV),
      sensitivityMvPerMt: typed(sensor.sensitivityMvPerMt),
      activeLow: sensor.activeLow,
      operateMt: typed(sensor.operateMt),
      releaseMt: typed(sensor.releaseMt),
    },
  };
}

/** The rig that the form means; what is no number becomes NaN, which the contract refuses at its field. */
export function rigOfDraft(draft: RigDraft): RigInput {
  const { wheel } = draft;
  return {
    name: draft.name,
    sensing: draft.sensing,
    wheel: {
      pulsesPerTurn: numberOf(wheel.pulsesPerTurn) ?? Number.NaN,
      missingPulses: numberOf(wheel.missingPulses) ?? 0,
      gearRatio: numberOf(wheel.gearRatio) ?? 1,
      widthClasses:
        draft.sensing === 'width-coded' && wheel.widthClasses.length > 0
          ? wheel.widthClasses.map((c) => ({
              widthS: (numberOf(c.widthUs) ?? Number.NaN) / 1e6,
              means: c.means,
            }))
          : null,
    },
    channels: draft.channels.map((c) => ({
      name: c.name.trim(),
      role: c.role,
      voltsPerCode: numberOf(c.voltsPerCode) ?? 1,
      codeOffset: numberOf(c.codeOffset) ?? 0,
      minCode: numberOf(c.minCode),
      maxCode: numberOf(c.maxCode),
      maxInputV: numberOf(c.maxInputV),
      sensor: sensorOfDraft(c.sensor),
    })),
    expectedDirection: draft.expectedDirection === 'either' ? null : draft.expectedDirection,
    ratedRpm: numberOf(draft.ratedRpm),
  };
}

/** What the kind of sensor does not have is left out, however it was typed before. */
function sensorOfDraft(sensor: ChannelDraft['sensor']): RigInput['channels'][number]['sensor'] {
  const linear = sensor.kind === 'linear';
  return {
    kind: sensor.kind,
    supplyV: numberOf(sensor.supplyV),
    quiescentV: linear ? numberOf(sensor.quiescentV) : null,
    sensitivityMvPerMt: linear ? numberOf(sensor.sensitivityMvPerMt) : null,
    activeLow: linear ? false : sensor.activeLow,
    operateMt: linear ? null : numberOf(sensor.operateMt),
    releaseMt: linear ? null : numberOf(sensor.releaseMt),
  };
}

/** A number as people type it: a comma may stand for the point. Empty: null. No number: NaN. */
export function numberOf(text: string): number | null {
  const clean = text.trim().replace('\u2212', '-');
  if (clean === '') return null;
  return /^[-+]?(\d+([.,]\d*)?|[.,]\d+)(e[-+]?\d+)?$/i.test(clean)
    ? Number(clean.replace(',', '.'))
    : Number.NaN;
}

function typed(value: number | null): string {
  return value === null ? '' : String(value);
}

function round(value: number): number {
  return Number(value.toPrecision(12));
}
