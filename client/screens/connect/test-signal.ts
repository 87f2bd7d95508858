import type { Channel, RigSetup } from '@/signal/model';

/** One channel of a made-up signal that this rig could give. */
export type TestChannel = {
  name: string;
  /** Volts between teeth and on a tooth; the other way round where a sensor pulls low on a tooth. */
  restV: number;
  toothV: number;
  /** How far its teeth come after those of A, in teeth. */
  behind: number;
  /** A switching sensor: steep flanks. */
  steep: boolean;
  /** Index: one tooth a turn. */
  oncePerTurn: boolean;
};

export type TestSignal = {
  rateHz: number;
  shaftRpm: number;
  toothHz: number;
  pulsesPerTurn: number;
  missingPulses: number;
  /** Width-coded: every pulse is this wide, s; else null. */
  pulseWidthS: number | null;
  channels: TestChannel[];
};

const rates = [1_000, 2_000, 5_000, 10_000, 20_000, 50_000, 100_000, 200_000, 500_000, 1_000_000];
const samplesPerTooth = 25;
/** Faster teeth would need more samples than a script sends with ease. */
const highestToothHz = 2_000;
const easyToothHz = 200;
const behindOf: Partial<Record<Channel['role'], number>> = { B: 0.25, V: 1 / 3, W: 2 / 3 };

/**
 * A plausible test signal: the rig's wheel at its rated speed (slower where the teeth would come too fast for a
 * script), forward, in volts that each channel's input takes. Channels with the role aux are left out.
 */
export function testSignal(rig: RigSetup): TestSignal {
  const { pulsesPerTurn, missingPulses, gearRatio } = rig.wheel;
  const teethPerShaftTurn = pulsesPerTurn * gearRatio;
  const ratedToothHz = rig.ratedRpm === null ? easyToothHz : (rig.ratedRpm / 60) * teethPerShaftTurn;
  const pulseWidthS = rig.sensing === 'width-coded' ? forwardWidthS(rig) : null;
  const toothHz = tidy(
    Math.min(ratedToothHz, highestToothHz, pulseWidthS === null ? Infinity : 0.3 / pulseWidthS),
  );
  const neededHz = Math.max(samplesPerTooth * toothHz, pulseWidthS === null ? 0 : 5 / pulseWidthS);
  return {
    rateHz: rates.find((rate) => rate >= neededHz) ?? 1_000_000,
    shaftRpm: (toothHz * 60) / teethPerShaftTurn,
    toothHz,
    pulsesPerTurn,
    missingPulses,
    pulseWidthS,
    channels: rig.channels.filter((c) => c.role !== 'aux').map(testChannel),
  };
}

function testChannel(channel: Channel): TestChannel {
  const [lowV, highV] = inputRange(channel);
  const span = highV - lowV;
  const low = round(lowV + 0.12 * span);
  const high = round(highV - 0.12 * span);
  const inverted = channel.sensor.kind !== 'linear' && channel.sensor.activeLow;
  return {
    name: channel.name,
    restV: inverted ? high : low,
    toothV: inverted ? low : high,
    behind: behindOf[channel.role] ?? 0,
    steep: channel.sensor.kind !== 'linear',
    oncePerTurn: channel.role === 'Z',
  };
}

/** The volts that the channel can show, from its converter's codes and its highest input. */
export function inputRange(channel: Channel): [lowV: number, highV: number] {
  const { minCode, maxCode, codeOffset, voltsPerCode, maxInputV, sensor } = channel;
  const top = maxInputV ?? sensor.supplyV ?? 3.3;
  if (minCode === null || maxCode === null) return [0, top];
  const ends = [minCode, maxCode].map((code) => (code - codeOffset) * voltsPerCode);
  const low = Math.min(...ends);
  const high = Math.max(...ends);
  return [low, maxInputV !== null && maxInputV > low ? Math.min(high, maxInputV) : high];
}

function forwardWidthS(rig: RigSetup): number | null {
  const classes = rig.wheel.widthClasses ?? [];
  return (classes.find((c) => c.means === 'forward') ?? classes[0])?.widthS ?? null;
}

function round(volts: number): number {
  return Number(volts.toFixed(3));
}

function tidy(hz: number): number {
  return Number(hz.toPrecision(6));
}
