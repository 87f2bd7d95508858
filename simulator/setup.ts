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
  return {
    ...words,
    wheel: {
      pulsesPerTurn: spec.wheel.positions,
      missingPulses: spec.wheel.missing?.length ?? 0,
      gearRatio: spec.gearRatio ?? 1,
    },
    channels: spec.channels.map((channel, i) => ({
      name: channel.name,
      role: i === 1 ? 'B' : 'A',
      voltsPerCode: codes?.voltsPerCode ?? 1,
      codeOffset: codes?.codeOffset ?? 0,
      minCode: codes?.minCode ?? null,
      maxCode: codes?.maxCode ?? null,
      maxInputV,
      sensor: sensorOf(channel, spec.supply?.nominalV ?? null),
    })),
  };
}

function sensorOf({ sensor }: ChannelSpec, supplyV: number | null): RigBody['channels'][number]['sensor'] {
  if (sensor.kind === 'linear') {
    const { quiescentV, sensitivityMvPerMt } = sensor;
    return {
      kind: 'linear',
      supplyV,
      quiescentV,
      sensitivityMvPerMt,
      activeLow: false,
      operateMt: null,
      releaseMt: null,
    };
  }
  const { kind, operateMt, releaseMt } = sensor;
  return { kind, supplyV, quiescentV: null, sensitivityMvPerMt: null, activeLow: true, operateMt, releaseMt };
}
