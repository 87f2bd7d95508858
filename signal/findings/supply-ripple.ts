import type { ChannelPath } from '@/signal/channel-path';
import { SizedLatch, findingOf } from '@/signal/findings/channel-finding';
import { toneNear } from '@/signal/findings/hum-tone';
import { commonMiddles } from '@/signal/findings/ripple-middles';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { makesInCommon, mostAt } from '@/signal/findings/slow-lines';
import { sizeAt } from '@/signal/findings/slow-spectrum';
import type { SlowSpectra, Spectrum } from '@/signal/findings/slow-spectrum';

/** Amplitude of what both have in common, over half the swing. */
const opensAt = 0.04;
const staysAt = 0.025;
const looksToOpen = 2;
/** Between two looks, bins. */
const sameTone = 2;
/** A line counts from here on, and above so many times the noise of a bin. */
const leastLine = 0.01;
const aboveNoise = 5;
/** Cosine of the phase between the two channels (and their correlation at that line). */
const inPhase = 0.85;
const mostUnequal = 2.5;
/** Two swings of a ripple of 1 Hz. */
const slowWindowS = 2;
const fewestHalfSwings = 3;
/** With fewer samples a tooth, where they fall moves the middles of both channels alike. */
const fewestSamples = 8;
/** The wheel must keep its speed for the window. */
const mostSpread = 0.03;

/** `isTone`: a line of the spectrum, whose frequency is known well. */
type Ripple = { amplitudeV: number; hz: number; correlation: number; isTone?: boolean };
type Line = { bin: number; power: number; correlation: number };

/**
 * Linear sensors follow their supply, so that its ripple moves the middles of all of them together. What the wheel makes
 * stands a quarter or a third of a tooth apart on two channels, except at low orders of the shaft, which are left out
 * with the harmonics of the teeth; so is mains hum, which a common cable picks up on both.
 */
export class SupplyRippleRule implements FindingRule {
  readonly latches = [new SizedLatch(2)];
  private readonly context: RuleContext;
  private readonly spectra: SlowSpectra;
  private readonly pair: readonly Spectrum[];
  private seen = 0;
  private sinceS = NaN;
  /** Frequency at the look before, where it was a tone; NaN: it was none. */
  private toneHz = NaN;
  /** When hum was last in the spectrum; the teeth's window is longer than that. */
  private humS = -Infinity;

  constructor(context: RuleContext, spectra: SlowSpectra) {
    this.context = context;
    this.spectra = spectra;
    this.pair = ratiometricPair(context, spectra);
  }

  /** False where there are no two linear sensors to compare. */
  get judges(): boolean {
    return this.pair.length === 2;
  }

  tick(nowS: number): void {
    const isNew = this.spectra.look(nowS);
    if (isNew && this.judges) this.judge(this.pair[0]!, this.pair[1]!, nowS);
    this.latches[0]!.rest(nowS);
  }

  private judge(a: Spectrum, b: Spectrum, nowS: number): void {
    const { spectra } = this;
    const latch = this.latches[0]!;
    const halfSwingV = Math.sqrt(a.wheel.halfSwingV * b.wheel.halfSwingV);
    const ripple = this.quickRipple(a, b, halfSwingV) ?? this.slowRipple(a, b);
    const share = (ripple?.amplitudeV ?? 0) / halfSwingV;
    if (share > staysAt) spectra.suspected = true;
    if (!ripple || !(share > (latch.open ? staysAt : opensAt))) {
      this.seen = 0;
      return;
    }
    // What jumps from one tone to another is none of a supply: a line where inputs stick, or a speed that changes.
    if (ripple.isTone && Math.abs(ripple.hz - this.toneHz) > sameTone * spectra.binHz) this.seen = 0;
    this.toneHz = ripple.isTone ? ripple.hz : NaN;
    if (++this.seen === 1) this.sinceS = (spectra.fromS + spectra.toS) / 2;
    if (!latch.open && this.seen < looksToOpen) return;
    const { paths } = this.context;
    const first = paths[a.index]!.channel;
    const { quiescentV, supplyV } = first.sensor;
    const evidence = {
      channels: `${first.name}, ${paths[b.index]!.channel.name}`,
      rippleHz: ripple.hz,
      amplitudeV: ripple.amplitudeV,
      ofHalfSwingPercent: 100 * share,
      correlation: ripple.correlation,
      ...(quiescentV && supplyV && { supplyAmplitudeV: (ripple.amplitudeV * supplyV) / quiescentV }),
    };
    const severity = share > 0.3 ? 'fault' : share > 0.08 ? 'warn' : 'note';
    const seen = { fromS: this.sinceS, atS: this.sinceS, severity, evidence } as const;
    latch.raiseSized(findingOf('supply-ripple', null, seen), share, nowS);
  }

  private quickRipple(a: Spectrum, b: Spectrum, halfSwingV: number): Ripple | null {
    const { binHz } = this.spectra;
    const lines = this.linesOf(a, b, halfSwingV);
    const amplitudeV = Math.sqrt(lines.reduce((sum, { power }) => sum + power, 0));
    if (!(amplitudeV > staysAt * halfSwingV)) return null;
    const { bin, correlation } = lines.reduce((best, line) => (line.power > best.power ? line : best));
    const hz = toneNear(a, binHz, bin * binHz, 1.5 * binHz)?.hz ?? bin * binHz;
    return { amplitudeV, hz, correlation, isTone: true };
  }

  /** Slower than the teeth; a hum that both pick up would be seen there as what it beats with the teeth. */
  private slowRipple(a: Spectrum, b: Spectrum): Ripple | null {
    const { context, spectra } = this;
    const { paths, rig } = context;
    if (a.wheel.teeth === 0 || context.rateHz < fewestSamples * a.wheel.toothHz) return null;
    const { pulsesPerTurn } = rig.wheel;
    const ripple = commonMiddles(paths[a.index]!, paths[b.index]!, pulsesPerTurn, spectra.toS - slowWindowS);
    if (!ripple) return null;
    if (this.hums(a, ripple.amplitudeV)) this.humS = spectra.toS;
    if (spectra.fromS - this.humS < slowWindowS) return null;
    // A step of both, or the begin of a ripple: the next look is to come soon.
    if (ripple.halfSwings < fewestHalfSwings) spectra.suspected = true;
    return ripple.halfSwings < fewestHalfSwings ? null : ripple;
  }

  /**
   * Whether mains hum may be what moves the middles. It moves a peak and the trough half a tooth later each its own way, and
   * the middle by what they have in common: near the frequency of the teeth next to nothing, and there teeth look like hum.
   */
  private hums(a: Spectrum, rippleV: number): boolean {
    const { wheel } = a;
    const { binHz } = this.spectra;
    return [50, 60].some((hz) => {
      if (Math.abs(wheel.toothHz - hz) < 3.5 * binHz + wheel.spreadHz) return false;
      const tone = toneNear(a, binHz, hz, 1);
      if (!tone || mostAt(wheel, tone.hz) > tone.amplitudeV) return false;
      return tone.amplitudeV * Math.abs(Math.cos((Math.PI * hz) / (2 * wheel.toothHz))) > rippleV / 2;
    });
  }

  /** A wheel that starts, stops or turns back makes things in common for a while. */
  private isSteady({ wheel }: Spectrum): boolean {
    const { motion, settleS } = this.context;
    const { fromS } = this.spectra;
    if (this.pair.every((spectrum) => spectrum.wheel.teeth === 0)) return motion.state !== 'running';
    if (motion.state !== 'running' || fromS < motion.calm.sinceS + settleS) return false;
    return wheel.locate() && wheel.spreadHz < mostSpread * wheel.toothHz;
  }

  private linesOf(a: Spectrum, b: Spectrum, halfSwingV: number): Line[] {
    const last = a.re.length - 3;
    let least = (leastLine * halfSwingV) ** 2;
    let raised = false;
    const lines: Line[] = [];
    for (let k = 3; k <= last; k++) {
      if (!(common(a, b, k) > least)) continue;
      if (!raised) {
        if (!this.isSteady(a)) return lines;
        raised = true;
        least = Math.max(least, (aboveNoise * binNoise(a)) ** 2, (aboveNoise * binNoise(b)) ** 2);
        if (!(common(a, b, k) > least)) continue;
      }
      const line = this.lineAt(a, b, k);
      if (line) lines.push(line);
    }
    return lines;
  }

  private lineAt(a: Spectrum, b: Spectrum, k: number): Line | null {
    const here = common(a, b, k);
    const below = common(a, b, k - 1);
    const above = common(a, b, k + 1);
    if (here < below || here <= above) return null;
    const sizeA = sizeAt(a, k);
    const sizeB = sizeAt(b, k);
    const correlation = here / (sizeA * sizeB);
    if (correlation < inPhase || sizeA > mostUnequal * sizeB || sizeB > mostUnequal * sizeA) return null;
    const hz = k * this.spectra.binHz;
    if (makesInCommon(a.wheel, hz) || this.isHum(a, hz, sizeA)) return null;
    // A tone fills three bins behind a Hann window, with one and a half times its power.
    const power = (Math.max(0, below) + here + Math.max(0, above)) / 1.5;
    return { bin: k, power, correlation };
  }

  /** The mains themselves, their odd harmonics, and the even ones where they come along with the first. */
  private isHum(a: Spectrum, hz: number, size: number): boolean {
    const { binHz } = this.spectra;
    for (const mainsHz of [50, 60]) {
      const harmonic = Math.round(hz / mainsHz);
      if (harmonic < 1 || harmonic > 6 || Math.abs(hz - harmonic * mainsHz) > binHz) continue;
      // 300 Hz is what three rectified phases leave.
      if (harmonic % 2 === 1 && !(mainsHz === 60 && harmonic === 5)) return true;
      const first = toneNear(a, binHz, mainsHz, 1);
      if (first && first.amplitudeV > size / 2) return true;
    }
    return false;
  }
}

/** Product of what the two channels have in phase at a bin, V^2. */
function common(a: Spectrum, b: Spectrum, k: number): number {
  return a.re[k]! * b.re[k]! + a.im[k]! * b.im[k]!;
}

const someBins = 64;

/** Rms size of white noise in a bin, from the median of some: 0.83 of it for a size of two normal parts. */
function binNoise(spectrum: Spectrum): number {
  const bins = spectrum.re.length - 6;
  const sizes = Float64Array.from({ length: someBins }, (_, i) =>
    sizeAt(spectrum, 3 + Math.floor((i * bins) / someBins)),
  );
  return sizes.sort()[someBins / 2]! / 0.83;
}

function ratiometricPair({ paths, lanes }: RuleContext, spectra: SlowSpectra): readonly Spectrum[] {
  const followsSupply = ({ channel }: ChannelPath): boolean =>
    channel.sensor.kind === 'linear' && (channel.sensor.supplyV ?? 0) > 0;
  return spectra.list
    .filter(({ index }) => lanes.includes(index) && followsSupply(paths[index]!))
    .slice(0, 2);
}
