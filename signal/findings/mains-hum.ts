import type { ChannelPath } from '@/signal/channel-path';
import { SizedLatch, findingOf } from '@/signal/findings/channel-finding';
import {
  isAnImage,
  isFree,
  isPaired,
  isSideBand,
  looksLikeEdges,
  onOrderHz,
  orderSize,
  reachHz,
} from '@/signal/findings/hum-doubts';
import { besideTone, toneNear } from '@/signal/findings/hum-tone';
import type { Tone } from '@/signal/findings/hum-tone';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { besideHarmonic, besideTeeth, fills, mostAt } from '@/signal/findings/slow-lines';
import type { SlowSpectra, Spectrum } from '@/signal/findings/slow-spectrum';
import type { SlowWheel } from '@/signal/findings/slow-wheel';

/** Amplitude over half the swing. */
const opens = { found: 0.05, cannotTell: 0.08 };
/** A squared signal has much of its own, and its flanks pass quickly. */
const opensSquared = { found: 0.1, cannotTell: 0.1 };
const stays = { found: 0.03, cannotTell: 0.05 };
const looksToOpen = 2;
/** Beside a line of the teeth hum beats with it, and is hidden every now and then. */
const mostUnseen = 1;
const sameHz = 0.35;
/** A tone stands so many times above everything beside it. */
const prominent = 2;

/** Orders up to this one are what run-out, an ellipse or a motor on the same shaft make; of a squared signal, any. */
const lowOrders = 4;

type Verdict = 'nothing' | 'found' | 'order' | 'edges';
type Judged = {
  path: ChannelPath;
  latch: SizedLatch;
  /** Looks in a row at which a tone was seen, and its frequency at the last one. */
  seen: number;
  /** Looks in a row at which it was not. */
  unseen: number;
  seenHz: number;
  sinceS: number;
};
type Sight = { tone: Tone; mainsHz: number; harmonic: number; verdict: Verdict };

/** A tone of 50 or 60 Hz, or of their second and third harmonic, that is not the wheel's own. Sought at rest as well. */
export class MainsHumRule implements FindingRule {
  readonly latches: SizedLatch[];
  private readonly context: RuleContext;
  private readonly spectra: SlowSpectra;
  private readonly judged: Judged[];
  /** Where harmonics alone may be the ripple of the sensors' supply, another rule looks for it. */
  private readonly ripples: boolean;

  /** @param ripples true where supply ripple is judged. */
  constructor(context: RuleContext, spectra: SlowSpectra, ripples: boolean) {
    this.context = context;
    this.spectra = spectra;
    this.ripples = ripples;
    this.judged = spectra.list.map(({ index }) => ({
      path: context.paths[index]!,
      latch: new SizedLatch(2),
      seen: 0,
      unseen: 0,
      seenHz: NaN,
      sinceS: NaN,
    }));
    this.latches = this.judged.map(({ latch }) => latch);
  }

  tick(nowS: number): void {
    const isNew = this.spectra.look(nowS);
    for (let i = 0; i < this.judged.length; i++) {
      if (isNew) this.judge(this.judged[i]!, this.spectra.list[i]!, nowS);
      this.latches[i]!.rest(nowS);
    }
  }

  private judge(judged: Judged, spectrum: Spectrum, nowS: number): void {
    const { spectra } = this;
    const { latch, path } = judged;
    const { wheel } = spectrum;
    const sight = this.strongest(judged, spectrum);
    if (!sight) {
      if (++judged.unseen > mostUnseen) judged.seen = 0;
      return;
    }
    judged.unseen = 0;
    // Hum keeps its frequency from look to look; a peak of noise does not.
    judged.seen = Math.abs(sight.tone.hz - judged.seenHz) < sameHz ? judged.seen + 1 : 1;
    judged.seenHz = sight.tone.hz;
    // The window that it was first seen in holds some of the time before.
    if (judged.seen === 1) judged.sinceS = (spectra.fromS + spectra.toS) / 2;
    if (!latch.open && judged.seen < looksToOpen) return;
    const { tone, mainsHz, harmonic, verdict } = sight;
    const share = tone.amplitudeV / wheel.halfSwingV;
    const evidence = {
      humHz: tone.hz,
      mainsHz,
      harmonic,
      amplitudeV: tone.amplitudeV,
      halfSwingV: wheel.halfSwingV,
      ofHalfSwingPercent: 100 * share,
      ...(verdict === 'order' && { turnHz: wheel.turnHz, order: Math.round(tone.hz / wheel.turnHz) }),
      ...(verdict === 'edges' && { edgesHz: wheel.toothHz }),
    };
    const seen = {
      fromS: judged.sinceS,
      atS: judged.sinceS,
      severity: share > 0.4 ? 'fault' : share > 0.1 ? 'warn' : 'note',
      outcome: verdict === 'found' ? 'found' : 'cannot-tell',
      evidence,
    } as const;
    latch.raiseSized(findingOf('mains-hum', path.channel.name, seen), share, nowS);
  }

  private strongest(judged: Judged, spectrum: Spectrum): Sight | null {
    const { spectra } = this;
    const { latch } = judged;
    const { wheel } = spectrum;
    const { halfSwingV } = wheel;
    const linear = judged.path.channel.sensor.kind === 'linear';
    const limits = latch.open ? stays : linear ? opens : opensSquared;
    // A squared signal has so many harmonics of its own that those of the mains are not worth the doubt.
    const mostHarmonic = this.ripples || !linear ? 1 : 3;
    let best: Sight | null = null;
    for (const mainsHz of [50, 60]) {
      for (let harmonic = 1; harmonic <= mostHarmonic; harmonic++) {
        const hz = harmonic * mainsHz;
        if (hz > spectra.nyquistHz - 4 * spectra.binHz) break;
        // Beside a stronger line hum need not be a peak of its own.
        if (!(spectra.sizeNear(spectrum, hz) > stays.found * halfSwingV)) continue;
        spectra.suspected = true;
        const sight = this.sightOf(judged, spectrum, mainsHz, harmonic);
        // What was known to be hum does not become doubtful by a line of the teeth that passes another place.
        if (latch.open?.outcome === 'found' && sight?.verdict !== 'found') continue;
        const limit = sight?.verdict === 'found' ? limits.found : limits.cannotTell;
        if (sight && sight.tone.amplitudeV > Math.max(limit * halfSwingV, best?.tone.amplitudeV ?? 0))
          best = sight;
      }
    }
    return best;
  }

  /** Of the last second, or of the last two where one is too short to tell the tone from what the wheel has beside it. */
  private sightOf(judged: Judged, spectrum: Spectrum, mainsHz: number, harmonic: number): Sight | null {
    const { spectra } = this;
    const hz = harmonic * mainsHz;
    const reach = harmonic * reachHz;
    const tone = toneNear(spectrum, spectra.binHz, hz, reach);
    const { wheel } = spectrum;
    if (!wheel.locate() || this.shakes(judged.path, wheel)) return null;
    const verdict = tone ? this.verdict(judged, spectrum, tone) : 'nothing';
    const isDoubtful = verdict === 'nothing' || (verdict === 'found' && besideHarmonic(wheel, tone!.hz));
    const sight = tone && !isDoubtful ? { tone, mainsHz, harmonic, verdict } : null;
    if (wheel.toothHz === 0 || (sight?.verdict === 'found' && isFree(wheel, sight.tone))) return sight;
    // Less than this opens nothing, and what a line of the teeth covers is not told from it in two seconds either.
    const least = (judged.latch.open ? stays.found : opens.found) * wheel.halfSwingV;
    if (!(spectra.sizeNear(spectrum, hz) > least) || besideHarmonic(wheel, hz, 1)) return sight;
    if (wheel.spreadHz > wheel.binHz) return sight;
    const longer = spectra.longerOf(spectrum);
    // A wheel that changes its speed smears its lines over more bins there.
    if (longer?.wheel.locate() && longer.wheel.spreadHz < 2 * longer.wheel.binHz) {
      const other = toneNear(longer, longer.wheel.binHz, hz, reach);
      // A hum that has gone stands there for a second more.
      const hasGone = sight && other && sight.tone.amplitudeV < 0.6 * other.amplitudeV;
      const closer = other && !hasGone ? this.verdict(judged, longer, other) : 'nothing';
      if (other && closer !== 'nothing') return { tone: other, mainsHz, harmonic, verdict: closer };
    }
    return sight;
  }

  /** A shaft that shakes at the band as it stands makes pulses at its own pace, of all frequencies. */
  private shakes({ channel }: ChannelPath, wheel: SlowWheel): boolean {
    return channel.sensor.kind !== 'linear' && wheel.teeth > 0 && this.context.motion.state !== 'running';
  }

  private verdict(judged: Judged, spectrum: Spectrum, tone: Tone): Verdict {
    const { latch, path } = judged;
    const { wheel } = spectrum;
    const known = latch.open?.outcome === 'found' && Math.abs(judged.seenHz - tone.hz) < sameHz;
    const beside = besideTone(
      spectrum,
      tone.bin,
      3,
      8,
      (bin) => fills(wheel, bin) || isPaired(this.spectra, spectrum, bin),
    );
    if (beside * (known ? 0.75 : 1) * prominent > tone.amplitudeV) return 'nothing';
    if (isAnImage(path.noiseV, besideTone(spectrum, tone.bin, 6, 10), tone)) return 'nothing';
    if (mostAt(wheel, tone.hz) > tone.amplitudeV)
      return looksLikeEdges(path, wheel, tone) ? 'edges' : 'nothing';
    if (known) return 'found';
    if (isSideBand(this.spectra, spectrum, tone)) return 'nothing';
    return this.onOrder(spectrum, tone, path.channel.sensor.kind === 'linear');
  }

  private onOrder(spectrum: Spectrum, tone: Tone, linear: boolean): Verdict {
    const { wheel } = spectrum;
    const { binHz } = wheel;
    // Closer rows of orders would stand beside the tone too.
    if (wheel.turnHz < 2 * binHz) return 'found';
    // What turns before or behind a gear has its own run-out.
    const { gearRatio } = this.context.rig.wheel;
    const shaftHz = wheel.turnHz / gearRatio;
    const shaftOrder = Math.round(tone.hz / shaftHz);
    const isOfShaft = shaftOrder >= 1 && shaftOrder <= lowOrders;
    if (gearRatio !== 1 && isOfShaft && Math.abs(shaftOrder * shaftHz - tone.hz) < onOrderHz) return 'order';
    const order = Math.round(tone.hz / wheel.turnHz);
    const off = Math.abs(order * wheel.turnHz - tone.hz);
    if (order > 0 && off < onOrderHz + (0.5 * order * wheel.spreadHz) / wheel.positions) {
      // A gap or a weak tooth makes a row of orders, each about as large as the next.
      const row = Math.max(orderSize(spectrum, order - 1, binHz), orderSize(spectrum, order + 1, binHz));
      if (3 * row > tone.amplitudeV) return 'nothing';
      // Where every second tooth is another, half the teeth come alone.
      if (order <= lowOrders || !linear || (2 * order) % wheel.positions === 0) return 'order';
    }
    return besideTeeth(wheel, tone.hz, onOrderHz) ? 'order' : 'found';
  }
}
