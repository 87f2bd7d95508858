/** What can be wrong with a swing, each against another thing: the band, the noise, the supply. */
import type { ChannelPath } from '@/signal/channel-path';
import type { TurnMeans } from '@/signal/findings/turn-means';
import { emptyAgain, emptyPlaces, isEven, repeats, usualIntervalS } from '@/signal/findings/tooth-rows';
import type { Evidence } from '@/signal/finding-words/values';
import type { Finding } from '@/signal/model';
import { readableFrom } from '@/signal/tooth-log';

export type SwingSight = {
  /** By which one look is worse than another. */
  size: number;
  severity: Finding['severity'];
  /** Where to look, s. */
  atS: number;
  evidence: Evidence;
};

/** What the worst tooth must stand beyond a fixed band: sigmas of noise, or share of the swing. */
const marginSigmas = 4;
const marginShare = 0.05;
/** Teeth that a fixed band did not count are a matter of swing where so large a share of the places is empty. */
const manyEmpty = 0.2;
/** An interval of so many places may hide a tooth that was not counted. */
const longPlaces = 1.4;
/** What comes back by less of the way from the usual level to the band is an edge that bounced, and no tooth. */
const ownShare = 0.5;
/** Peak to peak in sigmas at which a fitted band wants more than half of the swing for its hysteresis. */
const cappedSigmas = 20;
/** Of what the line is pulled up to. */
const highShare = 0.5;
/** Swing of a linear sensor over its supply: 40 codes of 12 bits. */
const tinyShare = 0.01;
/** An open finding asks for this much more before it goes. */
const more = 1.25;

/**
 * The worst tooth of the last turns against a fixed band, those that were not counted included.
 * @param rejected crossings of mid since the last look that did not come as far as the band's end.
 */
export function againstBand(
  path: ChannelPath,
  means: TurnMeans,
  rejected: number,
  open: boolean,
): SwingSight | null {
  const { log, operateV, releaseV, noiseV, channel } = path;
  const { first, end, swingV, toothHz } = means;
  const least = Math.max(marginShare * swingV, noiseV > 0 ? marginSigmas * noiseV : 0);
  const nearV = (open ? more : 1) * least;
  const isLong = !(means.longestS * toothHz < longPlaces);
  // No tooth can be worse than the lowest peak or the highest trough: mostly that is all there is to see.
  const plainlyV = Math.min(means.leastPeakV - operateV, releaseV - means.mostTroughV);
  if (!isLong && channel.sensor.kind === 'linear' && plainlyV >= nearV) return null;
  const { worst, worstV } = worstTooth(path, means);
  const isNear = worstV < nearV && wasNear(path, means, worst, 2 * least);
  if (!isNear && !isLong) return null;
  const usualS = usualIntervalS(log, first, end);
  const even = isEven(log, first, end, usualS);
  if (!even && !repeats(log, first, end, means.turn)) return null;
  const ofGaps = Math.ceil(((end - first) * (means.positions - means.turn)) / means.turn);
  const empty = even ? Math.max(0, emptyPlaces(log, first, end, usualS) - ofGaps) : 0;
  const places = end - first + ofGaps + empty;
  const isCertain = rejected >= empty || empty > manyEmpty * places;
  if (empty > 0 && isCertain && emptyAgain(log, end, usualS, means.positions)) {
    const evidence = {
      against: 'missed',
      ...(path.worstMarginV < 0 && { marginV: path.worstMarginV }),
      emptyPerTurn: (empty * means.positions) / places,
      swingV,
      operateV,
      releaseV,
    };
    return { size: 10, severity: 'fault', atS: longestGapS(path, means), evidence };
  }
  if (!isNear) return null;
  const evidence = {
    against: 'band',
    marginV: worstV,
    ...(noiseV > 0 && { marginSigmas: worstV / noiseV }),
    swingV,
    operateV,
    releaseV,
  };
  const atS = (log.riseS[worst & log.mask]! + log.fallS[worst & log.mask]!) / 2;
  return { size: 1 + (least - worstV) / least, severity: 'warn', atS, evidence };
}

/**
 * How far the worst tooth stands beyond the band, V. The output of a switch has but two levels, so that it is the mean tooth's
 * there: what stands between them is ringing.
 */
function worstTooth(path: ChannelPath, means: TurnMeans): { worst: number; worstV: number } {
  const { log, operateV, releaseV, channel } = path;
  const { first, end, highV, lowV } = means;
  const { mask, peakV, troughV } = log;
  if (channel.sensor.kind !== 'linear')
    return { worst: first, worstV: Math.min(highV - operateV, releaseV - lowV) };
  const upV = ownShare * (operateV - lowV);
  const downV = ownShare * (highV - releaseV);
  let worst = first;
  let worstV = Infinity;
  for (let n = first; n < end; n++) {
    const peak = peakV[n & mask]!;
    const trough = troughV[n & mask]!;
    const isPeak = peak - Math.max(trough, troughV[(n + 1) & mask]!) >= upV;
    const isTrough = n > first && Math.min(peak, peakV[(n - 1) & mask]!) - trough >= downV;
    const beyondV = Math.min(isPeak ? peak - operateV : Infinity, isTrough ? releaseV - trough : Infinity);
    if (beyondV >= worstV) continue;
    worstV = beyondV;
    worst = n;
  }
  return { worst, worstV };
}

/** A tooth of the wheel is as near a turn before; a signal that stood for a moment, or a spike, is not. */
function wasNear(
  { log, operateV, releaseV }: ChannelPath,
  { turn }: TurnMeans,
  n: number,
  nearV: number,
): boolean {
  const { mask, peakV, troughV } = log;
  const before = n - turn;
  if (before - 1 < readableFrom(log, 0)) return true;
  // Teeth that were not counted shift the others.
  for (let k = before - 1; k <= before + 1; k++)
    if (Math.min(peakV[k & mask]! - operateV, releaseV - troughV[k & mask]!) < nearV) return true;
  return false;
}

/** Noise so large that a fitted band cannot be as wide as it should. */
export function againstNoise({ noiseV }: ChannelPath, means: TurnMeans, open: boolean): SwingSight | null {
  const sigmas = means.swingV / noiseV;
  if (!(sigmas < (open ? more : 1) * cappedSigmas)) return null;
  const evidence = { against: 'noise', swingV: means.swingV, noiseV, swingSigmas: sigmas };
  const severity = sigmas < 12 ? 'fault' : 'warn';
  return { size: cappedSigmas / sigmas, severity, atS: means.fromS, evidence };
}

/** What a sensor should give by its supply. Nothing is known of levels behind a filter that takes the middle away. */
export function againstSupply({ channel }: ChannelPath, means: TurnMeans, open: boolean): SwingSight | null {
  const { kind, supplyV } = channel.sensor;
  const { highV, topV, swingV, fromS } = means;
  const room = open ? more : 1;
  if (kind === 'linear') {
    if (!supplyV || !(swingV < room * tinyShare * supplyV)) return null;
    const evidence = { against: 'range', swingV, supplyV, ofSupplyPercent: (100 * swingV) / supplyV };
    return { size: (tinyShare * supplyV) / swingV, severity: 'note', atS: fromS, evidence };
  }
  const pulledToV = pulledTo(channel.maxInputV, supplyV);
  // One tooth that comes up proves the pull-up: noise on a line at rest made the others.
  if (!(topV < room * highShare * pulledToV)) return null;
  const share = highV / pulledToV;
  const evidence = { against: 'pull-up', highV, expectedHighV: pulledToV, ofExpectedPercent: 100 * share };
  return { size: highShare / share, severity: share < 0.3 ? 'fault' : 'warn', atS: fromS, evidence };
}

/**
 * What an open line can be pulled up to: the supply, but no more than the input takes. A supply above what logic runs at
 * says nothing where the input's limit is not known. NaN: not known.
 */
function pulledTo(maxInputV: number | null, supplyV: number | null): number {
  if (!supplyV || !(supplyV > 0)) return NaN;
  if (maxInputV !== null) return Math.min(maxInputV, supplyV);
  return supplyV <= 5.5 ? supplyV : NaN;
}

/** The middle of the longest interval. */
function longestGapS({ log }: ChannelPath, { first, end }: TurnMeans): number {
  let longestS = 0;
  let atS = NaN;
  for (let n = first; n < end; n++) {
    const startS = log.riseS[n & log.mask]!;
    const lengthS = log.riseS[(n + 1) & log.mask]! - startS;
    if (lengthS <= longestS) continue;
    longestS = lengthS;
    atS = startS + lengthS / 2;
  }
  return atS;
}
