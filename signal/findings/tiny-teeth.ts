/**
 * Whether edges of a ring are those of a wheel at all. On a shaft at rest hum alone makes some, a few millivolts large, in
 * no order of the lines, until the first teeth come and the band has gone to where they are.
 */
import type { RuleContext } from '@/signal/findings/rule';
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

/** Of the supply: half of what the smallest swing that a linear sensor is used with comes to. */
const leastOfSupply = 0.02;
const looked = 12;
/** So many teeth below such a share of the largest: a tooth that something cuts short now and then is none of these. */
const tiny = 0.1;
const fewestTiny = 3;

/** True where one of the lanes' last teeth are, or just were, too small to be teeth. */
export function hasTinyTeeth({ paths, lanes }: Pick<RuleContext, 'paths' | 'lanes'>): boolean {
  return lanes.some((index) => {
    const { log, channel } = paths[index]!;
    return areTiny(log, leastOfSupply * (channel.sensor.supplyV ?? 0));
  });
}

function areTiny(log: ToothLog, leastV: number): boolean {
  const { count, mask, peakV, troughV } = log;
  const first = readableFrom(log, count - looked);
  let mostV = 0;
  for (let n = first; n < count; n++) {
    const swingV = peakV[n & mask]! - troughV[n & mask]!;
    if (swingV > mostV) mostV = swingV;
  }
  if (mostV === 0) return false;
  if (mostV < leastV) return true;
  let small = 0;
  for (let n = first; n < count; n++) if (peakV[n & mask]! - troughV[n & mask]! < tiny * mostV) small++;
  return small >= fewestTiny;
}
