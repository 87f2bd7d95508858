/** One channel of `UnseenTeeth`: when its raw signal is looked at, and what it must show to be taken for teeth. */
import type { ChannelPath } from '@/signal/channel-path';
import { BurstTone } from '@/signal/findings/burst-tone';
import { countsTone, spreadOfRing, spreadsLess } from '@/signal/findings/filtered-away';
import { RingTone } from '@/signal/findings/ring-tone';
import { isMains, unfoldedHz } from '@/signal/findings/tone-place';
import type { Section } from '@/signal/filter-design';
import { burstLength, rawNoiseV } from '@/signal/noise';
import { responseAt } from '@/signal/response';
import type { SlowRing } from '@/signal/slow-ring';
import { leastQuanta, leastSigmas } from '@/signal/tooth-size';

export type Unseen = {
  /** Too few samples a tooth; too much noise; or a filter that takes the teeth away. */
  why: 'fast' | 'noise' | 'filter';
  /** Of the raw signal, peak to peak. */
  swingV: number;
  /** What is left of it behind the filter. */
  leftV: number;
  /** Raw, rms. */
  noiseV: number;
  /** Of the teeth: folded where they are too fast; NaN where it may be one of several. */
  hz: number;
  fromS: number;
  /** The teeth are counted all the same. */
  counts: boolean;
};
type Sight = Omit<Unseen, 'fromS'>;

/** Without an edge for so long; between two looks; and over so long the filtered signal is looked at, s. */
const quietS = 0.8;
const everyS = 0.45;
const leftS = 0.5;
const looksNeeded = 2;
/** Teeth that were too fast passed for noise, and half of its bursts must be newer before a band is found, s. */
const lingerS = 2.5;
/** Five samples a tooth and less: fast. */
const fastCycles = 0.2;
/** Less than this share of the supply, or of the levels known, may be anything. */
const ofSupply = 0.02;
const ofKnown = 0.3;
/** Of the mains so much is no hum on a line that works. */
const mostMains = 0.2;
/** A filter that leaves less than this of the teeth, or of the raw signal where that is no noise, takes them away. */
const leastLeft = 0.1;
const leastRawSigmas = 16;
/** Noise that hides a swing of no more than so many sigmas: a fifth above what levels are found from. */
const hiddenSigmas = 1.2 * leastSigmas;

export class UnseenLane {
  unseen: Unseen | null = null;
  private readonly path: ChannelPath;
  private readonly sections: readonly Section[];
  private readonly rateHz: number;
  private readonly isFixed: boolean;
  private readonly burst = new BurstTone();
  private readonly tone: RingTone;
  private edges = -1;
  private quietFromS = NaN;
  private lookedS = -Infinity;
  private seen = 0;
  private seenWhy = '';
  private sightS = -Infinity;
  private seenFromS = NaN;
  private suspects = false;
  private lowV = Infinity;
  private highV = -Infinity;

  constructor(path: ChannelPath, sections: readonly Section[], rateHz: number, isFixed: boolean) {
    this.path = path;
    this.sections = sections;
    this.rateHz = rateHz;
    this.isFixed = isFixed;
    this.tone = new RingTone(path.slow.rateHz);
    // At the start there is no edge either.
    path.keepRawSlow(sections.length > 0);
  }

  restart(): void {
    this.quietFromS = NaN;
    this.burst.restart();
    this.forget();
  }

  tick(nowS: number): void {
    const { path, sections, burst } = this;
    if (path.edgeCount !== this.edges || Number.isNaN(this.quietFromS)) {
      this.edges = path.edgeCount;
      this.quietFromS = nowS;
      if (!this.suspects) {
        burst.restart();
        if (this.seen > 0) this.forget();
      }
    }
    const quiet = nowS - this.quietFromS;
    if (quiet > 0 || this.suspects) burst.take(path.bursts, this.leastV());
    if (sections.length > 0) this.gather();
    if (nowS - this.lookedS < everyS) return;
    this.lookedS = nowS;
    this.look(quiet >= quietS, nowS);
  }

  private look(isQuiet: boolean, nowS: number): void {
    const { path, sections, tone } = this;
    if (sections.length === 0) {
      if (!isQuiet) return;
      // No tone is larger than all of it.
      const isMore = spreadOfRing(path.slow, 1 / tone.binHz) >= this.leastV() && tone.look(path.slow);
      this.count(isMore ? this.judge(path.slow, true, nowS) : this.fast(), nowS);
      return;
    }
    const rawV = this.highV - this.lowV;
    this.lowV = Infinity;
    this.highV = -Infinity;
    this.suspects =
      rawV >= leastRawSigmas * rawNoiseV(path.bursts) && spreadsLess(path.slow, leftS, leastLeft * rawV);
    path.keepRawSlow(isQuiet || this.suspects || path.edgeCount === 0);
    if (!isQuiet && !this.suspects) {
      if (this.seen > 0) this.forget();
      return;
    }
    const ring = path.rawSlow;
    if (ring && tone.look(ring)) this.count(this.judge(ring, isQuiet, nowS), nowS);
  }

  private count(sight: Sight | null, nowS: number): void {
    if (!sight && this.seen > 0 && this.seenWhy === 'fast' && nowS - this.sightS < lingerS) return;
    if (!sight || (this.seen > 0 && sight.why !== this.seenWhy)) this.forget();
    if (!sight) return;
    this.sightS = nowS;
    if (this.seen++ === 0) this.seenFromS = Math.max(0, nowS - quietS);
    this.seenWhy = sight.why;
    this.unseen = this.seen >= looksNeeded ? { ...sight, fromS: this.seenFromS } : null;
  }

  private forget(): void {
    this.seen = 0;
    this.unseen = null;
  }

  /** Most and least of the raw signal; every thirty-second sample may fall on one and the same place of every tooth. */
  private gather(): void {
    const { spreadLowV, spreadHighV, bursts } = this.path;
    let { lowV, highV } = this;
    if (spreadLowV < lowV) lowV = spreadLowV;
    if (spreadHighV > highV) highV = spreadHighV;
    if (bursts.seen > 0) {
      const { burst } = bursts;
      for (let i = 0; i < burstLength; i++) {
        const x = burst[i]!;
        if (x < lowV) lowV = x;
        if (x > highV) highV = x;
      }
    }
    this.lowV = lowV;
    this.highV = highV;
  }

  private judge(ring: SlowRing, isQuiet: boolean, nowS: number): Sight | null {
    const { path, tone, burst, rateHz, sections } = this;
    const fast = isQuiet ? this.fast() : null;
    if (fast) return fast;
    const byBurst = burst.cyclesPerSample < fastCycles && !(burst.swingV < tone.swingV);
    const swingV = byBurst ? burst.swingV : tone.swingV;
    if (!(swingV >= this.leastV())) return null;
    const mains = !byBurst && isMains(tone.hz, ring.rateHz, 1.5 * tone.binHz);
    const { supplyV } = path.channel.sensor;
    if (mains && !(swingV > mostMains * (supplyV ?? Infinity))) return null;
    const noiseV = rawNoiseV(path.bursts);
    const share = 1 / (1 + 8 * (noiseV / swingV) ** 2);
    const hz = byBurst
      ? burst.cyclesPerSample * rateHz
      : unfoldedHz(tone.hz, ring.rateHz, rateHz, fastCycles * rateHz, share, burst);
    const leftV = sections.length > 0 ? spreadOfRing(path.slow, leftS) : swingV;
    if (sections.length > 0) {
      const gain = Number.isNaN(hz) ? NaN : responseAt(sections, hz, rateHz).magnitude;
      if (gain < leastLeft || leftV < leastLeft * swingV) {
        const counts = !isQuiet && countsTone(path, hz, tone, ring.rateHz, nowS);
        return { why: 'filter', swingV, leftV, noiseV, hz, counts };
      }
    }
    // A fixed band makes edges of whatever crosses it, noise or not.
    if (!isQuiet || this.isFixed || !(swingV < hiddenSigmas * noiseV)) return null;
    return { why: 'noise', swingV, leftV, noiseV, hz, counts: false };
  }

  /** So quick that neighbouring samples are far apart. */
  private fast(): Sight | null {
    const { burst, rateHz, tone, path } = this;
    const { cyclesPerSample, swingV } = burst;
    if (!(cyclesPerSample >= fastCycles) || !(swingV >= this.leastV())) return null;
    const hz = cyclesPerSample * rateHz;
    // A burst cannot tell one from the other; the ring can.
    if (isMains(hz, rateHz, rateHz / burstLength) && !(tone.hz > 0 && !isMains(tone.hz, path.slow.rateHz, 1)))
      return null;
    return { why: 'fast', swingV, leftV: swingV, noiseV: rawNoiseV(path.bursts), hz, counts: false };
  }

  private leastV(): number {
    const { levels, channel, bursts } = this.path;
    const ofQuanta = 2 * leastQuanta * bursts.quantumV;
    const ofRange = ofSupply * (channel.sensor.supplyV ?? 0);
    return Math.max(ofQuanta, ofRange, ofKnown * (levels.highV - levels.lowV) || 0);
  }
}
