/**
 * How much of a linear sensor's raw signal stands at an end of its range, from some of its samples.
 *
 * For codes the converter's ends are such rails. An output that saturates stands 0.05 to 8 % of the supply before the
 * sensor's rail, nobody knows where: samples in these two zones are sorted into narrow bins, so that what piles up at one
 * level can be told from the top of a signal that just comes that far.
 */
import type { Channel } from '@/signal/model';

const zoneShare = 0.08;
const zoneBins = 24;
/** The others lie beyond the supply's ends. */
const binsInZone = 16;
/** A visit that lasts longer is a shaft at rest or a dead channel, s. */
const longestVisitS = 2;

export type RailMeter = {
  /** The converter's ends, V; infinite where samples are volts. */
  lowV: number;
  highV: number;
  /** Where the zones before the sensor's rails begin, V; infinite without a supply. */
  zoneLowV: number;
  zoneHighV: number;
  /** Width of a bin, V. */
  binV: number;
  checked: number;
  atLow: number;
  atHigh: number;
  /** Samples in the zones, counted from their beginning outwards. */
  low: Uint32Array;
  high: Uint32Array;
  /** Times that the signal came to an end or its zone and left it again, since the stream began. */
  visits: number;
  /** Place in the stream of the last sample there. */
  lastAt: number;
  /** At which end it is: 1 or -1; 0: at none. */
  inside: number;
  /** No sample has been seen yet. */
  fresh: boolean;
  /** Where the visit began; NaN: the stream began in it. */
  arrivedAt: number;
  longestVisit: number;
};

/** Null where standing at an end is no fault of this sensor, or where no end is known. */
export function createRailMeter(channel: Channel, codes: boolean, rateHz: number): RailMeter | null {
  const { sensor, minCode, maxCode, codeOffset, voltsPerCode } = channel;
  if (sensor.kind !== 'linear') return null;
  const supplyV = sensor.supplyV !== null && sensor.supplyV > 0 ? sensor.supplyV : NaN;
  const known = codes && minCode !== null && maxCode !== null;
  if (!known && Number.isNaN(supplyV)) return null;
  const a = known ? (minCode - codeOffset) * voltsPerCode : -Infinity;
  const b = known ? (maxCode - codeOffset) * voltsPerCode : Infinity;
  const zoneV = zoneShare * supplyV;
  return {
    lowV: Math.min(a, b),
    highV: Math.max(a, b),
    zoneLowV: Number.isNaN(supplyV) ? -Infinity : zoneV,
    zoneHighV: Number.isNaN(supplyV) ? Infinity : supplyV - zoneV,
    binV: zoneV / binsInZone,
    checked: 0,
    atLow: 0,
    atHigh: 0,
    low: new Uint32Array(zoneBins),
    high: new Uint32Array(zoneBins),
    visits: 0,
    lastAt: NaN,
    inside: 0,
    fresh: true,
    arrivedAt: NaN,
    longestVisit: longestVisitS * rateHz,
  };
}

/** True where one of some samples between `lowV` and `highV` stands at an end or in its zone. */
export function touchesRails(meter: RailMeter, lowV: number, highV: number): boolean {
  return highV >= meter.zoneHighV || highV >= meter.highV || lowV <= meter.zoneLowV || lowV <= meter.lowV;
}

/** One raw sample, V, at stream index `at`. */
export function watchRails(meter: RailMeter, volts: number, at: number): void {
  const { fresh } = meter;
  meter.fresh = false;
  meter.checked++;
  const { zoneHighV, zoneLowV, binV, high, low } = meter;
  if (volts >= meter.highV) meter.atHigh++;
  else if (volts <= meter.lowV) meter.atLow++;
  else if (volts >= zoneHighV) high[Math.min(zoneBins - 1, Math.floor((volts - zoneHighV) / binV))]!++;
  else if (volts <= zoneLowV) low[Math.min(zoneBins - 1, Math.floor((zoneLowV - volts) / binV))]!++;
  else {
    leaveRails(meter, at);
    return;
  }
  meter.lastAt = at;
  const end = volts >= zoneHighV || volts >= meter.highV ? 1 : -1;
  if (meter.inside === end) return;
  if (meter.inside !== 0) leaveRails(meter, at);
  meter.inside = end;
  meter.arrivedAt = fresh ? NaN : at;
}

/** A raw sample at stream index `at` that does not stand at the end where the ones before did. */
export function leaveRails(meter: RailMeter, at: number): void {
  meter.fresh = false;
  if (meter.inside === 0) return;
  meter.inside = 0;
  if (at - meter.arrivedAt < meter.longestVisit) meter.visits++;
}

/** Samples were lost: a visit that was under way has no known length. */
export function breakRails(meter: RailMeter): void {
  meter.arrivedAt = NaN;
}

/** Counting begins anew; visits go on. */
export function restartRails(meter: RailMeter): void {
  meter.checked = meter.atLow = meter.atHigh = 0;
  meter.low.fill(0);
  meter.high.fill(0);
}

export type Pile = { count: number; levelV: number };

/** So many times more samples than in the bins before it: the top of a sine has 1.4 times as many. */
const steepness = 4;
/** Of the pile, what may lie beyond it. */
const beyondShare = 0.1;

/** What piles up at one level of a zone, as an output does that can go no further; null where nothing does. */
export function pileIn(meter: RailMeter, end: 'low' | 'high'): Pile | null {
  const bins = meter[end];
  let peak = 0;
  for (let k = 1; k < zoneBins; k++) if (bins[k]! > bins[peak]!) peak = k;
  if (bins[peak] === 0) return null;
  let before = 0;
  let beyond = 0;
  const count = bins[peak]! + (bins[peak - 1] ?? 0) + (bins[peak + 1] ?? 0);
  for (let k = Math.max(0, peak - 4); k < peak - 1; k++) before += bins[k]!;
  for (let k = peak + 2; k < zoneBins; k++) beyond += bins[k]!;
  // Three bins of the pile against three before it; at the zone's very beginning nothing is known of what comes before.
  if (peak < 4 || count < steepness * before || beyond > beyondShare * count) return null;
  const out = (peak + 0.5) * meter.binV;
  return { count, levelV: end === 'high' ? meter.zoneHighV + out : meter.zoneLowV - out };
}
