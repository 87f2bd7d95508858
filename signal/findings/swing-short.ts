/**
 * A signal that goes up and down and never reaches its fixed band, so that no edge tells of it. Looked for in the slow
 * ring, once a second, while no edge comes.
 */
import type { ChannelPath } from '@/signal/channel-path';
import type { RuleContext } from '@/signal/findings/rule';
import type { SwingSight } from '@/signal/findings/swing-sights';
import { toneNear } from '@/signal/findings/hum-tone';
import type { SlowSpectra } from '@/signal/findings/slow-spectrum';

const everyS = 0.9;
const windowS = 1;
/** Peak to peak over the width of the band, and over the noise: less is no signal. */
const leastOfBand = 0.5;
const leastSigmas = 12;
/** So many whole swings in the window. */
const fewestSwings = 3;
/** A tone of the mains of so large a share of half the swing is hum. */
const humShare = 0.4;

export class ShortSwing {
  /** It goes up and down now, and never made an edge: nobody knows whether the shaft stands. */
  isBeside = false;
  private readonly context: RuleContext;
  private readonly path: ChannelPath;
  private readonly index: number;
  private readonly spectra: SlowSpectra;
  private edges = -1;
  private quietSinceS = NaN;
  private lookedS = -Infinity;
  private lowV = NaN;
  private highV = NaN;

  constructor(context: RuleContext, index: number, spectra: SlowSpectra) {
    this.context = context;
    this.path = context.paths[index]!;
    this.index = index;
    this.spectra = spectra;
  }

  /** @returns undefined where there is nothing new to say. */
  look(nowS: number): (SwingSight & { sure: boolean }) | null | undefined {
    const { path } = this;
    if (this.context.settings.band.mode !== 'fixed' || path.channel.role === 'aux') return undefined;
    if (path.edgeCount !== this.edges) {
      this.edges = path.edgeCount;
      this.quietSinceS = nowS;
      this.isBeside = false;
      return undefined;
    }
    if (nowS - this.quietSinceS < windowS || nowS - this.lookedS < everyS) return undefined;
    this.lookedS = nowS;
    const sight = this.judge(nowS);
    this.isBeside = sight !== null && path.log.count === 0;
    return sight;
  }

  private judge(nowS: number): (SwingSight & { sure: boolean }) | null {
    const { path } = this;
    const { operateV, releaseV, noiseV } = path;
    const swings = this.swings();
    const swingV = this.highV - this.lowV;
    const enough = swingV > leastOfBand * (operateV - releaseV) && !(swingV < leastSigmas * noiseV);
    if (swings < fewestSwings || !enough || this.isHum(swingV)) return null;
    const evidence = {
      against: 'short',
      marginV: Math.min(this.highV - operateV, releaseV - this.lowV),
      lowV: this.lowV,
      highV: this.highV,
      operateV,
      releaseV,
    };
    // A shaft that came to rest may rock within a tooth; one whose other channel counts does not.
    const sure = path.log.count === 0 || this.othersCount();
    return { size: 5, severity: 'fault', atS: nowS - windowS / 2, evidence, sure };
  }

  private othersCount(): boolean {
    const { motion, lanes, paths } = this.context;
    return motion.state === 'running' || lanes.some((lane) => paths[lane]!.edgeCount > this.edges + 12);
  }

  /** Whole swings through the middle in the window, each at least to a quarter on either side. */
  private swings(): number {
    const { v, mask, count, rateHz, unbrokenFrom } = this.path.slow;
    const from = Math.max(unbrokenFrom, count - Math.round(windowS * rateHz), count - v.length);
    let low = Infinity;
    let high = -Infinity;
    for (let n = from; n < count; n++) {
      const x = v[n & mask]!;
      if (x < low) low = x;
      if (x > high) high = x;
    }
    this.lowV = low;
    this.highV = high;
    const up = high - (high - low) / 4;
    const down = low + (high - low) / 4;
    let swings = 0;
    let isHigh = false;
    for (let n = from; n < count; n++) {
      const x = v[n & mask]!;
      if (isHigh ? x < down : x > up) {
        isHigh = !isHigh;
        if (isHigh) swings++;
      }
    }
    return swings;
  }

  private isHum(swingV: number): boolean {
    const { spectra, index } = this;
    const spectrum = spectra.list.find((one) => one.index === index);
    if (!spectrum) return false;
    return [50, 60].some((hz) => {
      const tone = toneNear(spectrum, spectra.binHz, hz, 1);
      return tone !== null && tone.amplitudeV > (humShare * swingV) / 2;
    });
  }
}
