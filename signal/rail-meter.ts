/**
 * How much of a linear sensor's raw signal stands at a rail, from every thirty-second sample. For codes the rails are the
 * converter's ends. For volts they are the ends of the sensor's supply, where an output that saturates stands 0.05 to
 * 8 % of the supply before the rail and does not move at all.
 */
import type { Channel } from '@/signal/model';

export const railStride = 32;

export type RailMeter = {
  lowV: number;
  highV: number;
  /** Volts: a sample only counts where it equals the one before. */
  flatOnly: boolean;
  previousV: number;
  checked: number;
  atLow: number;
  atHigh: number;
  lastAt: number;
};

/** Null where clipping is no fault of this sensor, or where no rail is known. */
export function createRailMeter(channel: Channel, codes: boolean): RailMeter | null {
  if (channel.sensor.kind !== 'linear') return null;
  const ends = codes ? codeEnds(channel) : supplyEnds(channel);
  if (!ends) return null;
  return { ...ends, previousV: NaN, checked: 0, atLow: 0, atHigh: 0, lastAt: NaN };
}

function codeEnds({
  minCode,
  maxCode,
  codeOffset,
  voltsPerCode,
}: Channel): Pick<RailMeter, 'lowV' | 'highV' | 'flatOnly'> | null {
  if (minCode === null || maxCode === null) return null;
  const a = (minCode - codeOffset) * voltsPerCode;
  const b = (maxCode - codeOffset) * voltsPerCode;
  return { lowV: Math.min(a, b), highV: Math.max(a, b), flatOnly: false };
}

function supplyEnds({ sensor }: Channel): Pick<RailMeter, 'lowV' | 'highV' | 'flatOnly'> | null {
  if (sensor.supplyV === null || sensor.supplyV <= 0) return null;
  return { lowV: 0.08 * sensor.supplyV, highV: 0.92 * sensor.supplyV, flatOnly: true };
}

/** True where one of some samples between `lowV` and `highV` stands at a rail. */
export function touchesRails(meter: RailMeter, lowV: number, highV: number): boolean {
  return highV >= meter.highV || lowV <= meter.lowV;
}

/** One raw sample, V, at stream index `at`. */
export function watchRails(meter: RailMeter, volts: number, at: number): void {
  meter.checked++;
  if (volts >= meter.highV || volts <= meter.lowV) {
    if (!meter.flatOnly || volts === meter.previousV) {
      if (volts >= meter.highV) meter.atHigh++;
      else meter.atLow++;
      meter.lastAt = at;
    }
  }
  meter.previousV = volts;
}

export function restartRails(meter: RailMeter): void {
  meter.checked = meter.atLow = meter.atHigh = 0;
}
