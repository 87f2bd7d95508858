/** The rig's setup as the hub is told it, taken from the model, so that the two cannot differ. */
import { codeRange } from '@/simulator/adc';
import type { ChannelSpec, RigSpec } from '@/simulator/rig-model';
import type { RigBody } from '@/simulator/setup-shape';

export function setupOf(
  spec: RigSpec,
  words: Pick<RigBody, 'name' | 'sensing' | 'expectedDirection' | 'ratedRpm'>,
  maxInputV: number,
): RigBody {
  const { adc } = spec;
  const codes = adc.kind === 'codes' ? { ...adc, ...codeRange(adc) } : undefined;
  const widthClasses = widthClassesOf(spec);
  return {
    ...words,
    wheel: {
      pulsesPerTurn: spec.wheel.positions,
      missingPulses: spec.wheel.missing?.length ?? 0,
      gearRatio: spec.gearRatio ?? 1,
      ...(widthClasses && { widthClasses }),
    },
    channels: spec.channels.map((channel, i) => ({
      name: channel.name,
      role: roleOf(spec, words.sensing, i),
      voltsPerCode: codes?.voltsPerCode ?? 1,
      codeOffset: codes?.codeOffset ?? 0,
      minCode: codes?.minCode ?? null,
      maxCode: codes?.maxCode ?? null,
      maxInputV,
      sensor: sensorOf(channel, spec.supply?.nominalV ?? null),
    })),
  };
}

type Role = RigBody['channels'][number]['role'];
const rolesOf: Record<RigBody['sensing'], Role[]> = {
  single: ['A'],
  'width-coded': ['A'],
  quadrature: ['A', 'B'],
  'three-hall': ['U', 'V', 'W'],
};

function roleOf(spec: RigSpec, sensing: RigBody['sensing'], index: number): Role {
  const channel = spec.channels[index] as ChannelSpec;
  if (channel.role) return channel.role;
  if (channel.track === 'index') return 'Z';
  const before = spec.channels.slice(0, index).filter(({ track }) => track !== 'index');
  return rolesOf[sensing][before.length] ?? 'aux';
}

function widthClassesOf({ channels }: RigSpec): RigBody['wheel']['widthClasses'] {
  for (const { sensor } of channels) {
    if (sensor.kind !== 'pulse') continue;
    const { forwardS, reverseS, weakS } = sensor.widths;
    return [
      { widthS: forwardS, means: 'forward' },
      { widthS: reverseS, means: 'reverse' },
      { widthS: weakS, means: 'weak' },
    ];
  }
  return undefined;
}

function sensorOf({ sensor }: ChannelSpec, supplyV: number | null): RigBody['channels'][number]['sensor'] {
  const nothing = {
    supplyV,
    quiescentV: null,
    sensitivityMvPerMt: null,
    activeLow: false,
    operateMt: null,
    releaseMt: null,
  };
  switch (sensor.kind) {
    case 'linear': {
      const { quiescentV, sensitivityMvPerMt } = sensor;
      return { ...nothing, kind: 'linear', quiescentV, sensitivityMvPerMt };
    }
    // To the hub it is a switch: high for a pulse, low between.
    case 'pulse':
      return { ...nothing, kind: 'switch' };
    default: {
      const { kind, operateMt, releaseMt } = sensor;
      return { ...nothing, kind, activeLow: true, operateMt, releaseMt };
    }
  }
}
