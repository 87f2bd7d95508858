/** The parts of a drawn rig that follow from what it is to sense: rate, channels, converter. */
import type { Sensing } from '@/signal/model';
import type { AdcSpec } from '@/simulator/adc';
import type { ChannelSpec } from '@/simulator/rig-model';
import type { Draw } from '@/tests/accuracy/findings/draw';
import {
  drawElectronics,
  indexSensorFor,
  type DrawnSensor,
  type SensorWord,
} from '@/tests/accuracy/findings/sensors';
import type { Tolerances, WheelKind } from '@/tests/accuracy/findings/wheels';

type Range = [number, number];
export type Wants = {
  sensing?: readonly Sensing[];
  sensors?: readonly SensorWord[];
  wheels?: readonly WheelKind[];
  positions?: Range;
  /** Positions without a tooth, one of these numbers. */
  missing?: readonly number[];
  index?: boolean;
  /** Of the wheel, at its fastest. */
  toothHz?: Range;
  turnsPerS?: Range;
  samplesPerTooth?: Range;
  snrDb?: Range;
  adc?: AdcSpec['kind'];
  tolerances?: Tolerances;
};

const rates = [1000, 1250, 2000, 2500, 4000, 5000, 8000, 10_000, 12_500, 20_000, 25_000, 50_000];

export function rateFor(draw: Draw, toothHz: number, sensing: Sensing, wants: Wants): number {
  const least = sensing === 'three-hall' ? 24 : 16;
  const [low, high] = wants.samplesPerTooth ?? [least, 3 * least];
  // The shortest pulse, 0.2 ms, takes at least four samples.
  const wanted = Math.max(draw.uniform(low, high) * toothHz, sensing === 'width-coded' ? 20_000 : 0);
  return rates.find((rate) => rate >= wanted) ?? 50_000;
}

export function drawChannels(
  draw: Draw,
  sensing: Sensing,
  wants: Wants,
  drawn: DrawnSensor,
  noiseV: number,
): ChannelSpec[] {
  const places = { single: [0], 'width-coded': [0], quadrature: [0, 90], 'three-hall': [0, 120, 240] }[
    sensing
  ];
  const names = sensing === 'three-hall' ? ['U', 'V', 'W'] : ['A', 'B'];
  const { inverted, sensor, baselineMt } = drawn;
  const channels: ChannelSpec[] = places.map((placeDeg, i) => ({
    inverted,
    sensor,
    baselineMt,
    name: names[i] as string,
    placeDeg: i === 0 ? 0 : placeDeg + (sensing === 'three-hall' ? 0.5 : 1) * draw.uniform(-6, 6),
    electronics: { ...drawElectronics(draw, drawn, 40), noiseRmsV: noiseV },
  }));
  if (wants.index)
    channels.push({
      name: 'Z',
      placeDeg: 0,
      sensor: indexSensorFor(drawn).sensor,
      track: 'index',
      electronics: { noiseRmsV: noiseV },
    });
  return channels;
}

export function drawAdc(draw: Draw, supplyV: number, kind: AdcSpec['kind'] | undefined): AdcSpec {
  if ((kind ?? draw.pick(['codes', 'codes', 'codes', 'volts'] as const)) === 'volts')
    return { kind: 'volts' };
  const bits = draw.pick([10, 12, 12, 14, 16]);
  return { kind: 'codes', bits, voltsPerCode: supplyV / 2 ** bits, codeOffset: 0 };
}
