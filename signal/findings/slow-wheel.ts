/** The teeth in the window of the slow spectra: how quick, how large, and what of them is usual. */
import type { ChannelPath } from '@/signal/channel-path';
import { teethPerTurn } from '@/signal/findings/channel-finding';
import type { RuleContext } from '@/signal/findings/rule';
import { folded } from '@/signal/findings/slow-lines';
import { firstSince, isEven, placesBetween, repeats, usualIntervalS } from '@/signal/findings/tooth-rows';
import type { ToothLog } from '@/signal/tooth-log';

const knownHarmonics = 12;
/** Of the window. */
const leastFilled = 0.8;
const fewestInRow = 8;
/** With more teeth than this in the window their harmonics are images, which say nothing of other speeds. */
const mostTeeth = 600;

export class SlowWheel {
  /** Of one position over the window, Hz, once located; 0 where fewer than three teeth came in it. */
  toothHz = 0;
  /** By how much it differed over the window, Hz. */
  spreadHz = 0;
  /** Turns of the wheel a second. */
  turnHz = 0;
  /** Mean peak to peak over the window, V; NaN where no tooth came. */
  swingV = NaN;
  /** Half of the swing as last seen; before any tooth, what the sensor lets expect. NaN: nothing to measure against. */
  halfSwingV: number;
  /** Teeth have been seen. */
  learnt = false;
  /** From 10 % to 90 % of the swing, s. */
  flankS = 0;
  private isLocated: boolean | null = null;
  /** Usual size of the first harmonics over half the swing; NaN: not seen yet. */
  private usual = new Float64Array(knownHarmonics + 1).fill(NaN);
  /** Where the harmonics were when they were last learnt, folded. */
  private readonly linesHz = new Float64Array(knownHarmonics + 1);
  /** The signal came to an end of its range in the window, where it may have been cut off: its harmonics are others. */
  private isCut = false;
  private readonly context: RuleContext;
  private readonly path: ChannelPath;
  private first = 0;
  private last = -1;
  private readonly turn: number;
  /** Of one turn, those without a tooth included. */
  readonly positions: number;
  readonly binHz: number;
  readonly nyquistHz: number;

  constructor(context: RuleContext, path: ChannelPath, binHz: number, nyquistHz: number) {
    this.context = context;
    this.path = path;
    this.turn = teethPerTurn(context, path);
    this.positions = context.rig.wheel.pulsesPerTurn;
    this.binHz = binHz;
    this.nyquistHz = nyquistHz;
    this.halfSwingV = expectedHalfSwingV(path, context);
  }

  /** Takes the teeth of the window; their frequency is found when it is asked for. */
  read(fromS: number): void {
    this.take(fromS);
    this.learnSwing();
  }

  /** The same of a longer window; what is usual is known from the shorter ones. */
  readLonger(fromS: number, { usual, halfSwingV, learnt }: SlowWheel): void {
    this.take(fromS);
    this.usual = usual;
    this.halfSwingV = halfSwingV;
    this.learnt = learnt;
  }

  private take(fromS: number): void {
    const { log } = this.path;
    this.last = log.count - 1;
    this.first = firstSince(log, fromS);
    this.toothHz = this.spreadHz = this.turnHz = 0;
    this.swingV = NaN;
    this.isLocated = null;
    this.isCut = (this.path.rails?.lastAt ?? NaN) > fromS * this.context.rateHz;
    this.readFlanks(Math.max(this.first, this.last - 16), this.last);
  }

  /** What harmonic `h` usually has, over half the swing; NaN where that is not known. */
  usualOf(h: number): number {
    return this.isCut ? NaN : (this.usual[h] ?? NaN);
  }

  /** Rising edges in the window. */
  get teeth(): number {
    return Math.max(0, this.last - this.first + 1);
  }

  /** Teeth a second in the window, gaps not filled; 0 where there are fewer than three. */
  private edgesHz(): number {
    const { first, last } = this;
    const { log } = this.path;
    if (last - first < 2) return 0;
    return (last - first) / (log.riseS[last & log.mask]! - log.riseS[first & log.mask]!);
  }

  /**
   * Fills in the frequencies. Places without a tooth are counted as multiples of the usual interval; where teeth are too
   * uneven for that, their pattern has to come again each turn.
   * @returns false where neither holds, as with edges that bounce: then nothing is known of where orders are.
   */
  locate(): boolean {
    this.isLocated ??= this.place();
    return this.isLocated;
  }

  /**
   * Takes the size of the harmonics from a spectrum of a steady wheel. Beside the mains only where nothing is known yet. Of
   * a squared signal the next shift of its duty makes others, so that nothing is learnt from it.
   */
  learnLines(sizeNear: (hz: number) => number): void {
    if (this.path.channel.sensor.kind !== 'linear') return;
    if (this.isCut || this.teeth < 3 || this.teeth > mostTeeth || !this.locate() || !this.fillsWindow())
      return;
    const { usual, toothHz, spreadHz, binHz, nyquistHz, halfSwingV, linesHz } = this;
    for (let h = 1; h <= knownHarmonics; h++) {
      const hz = folded(this, h * toothHz);
      linesHz[h] = hz;
      if (h * spreadHz > binHz) return;
      if (hz < 3 * binHz || hz > nyquistHz - 3 * binHz || this.isHidden(h, hz)) continue;
      const share = sizeNear(hz) / halfSwingV;
      const before = usual[h]!;
      if (Number.isNaN(before)) usual[h] = share;
      else if (Math.abs(hz - 50) > 3 * binHz && Math.abs(hz - 60) > 3 * binHz)
        usual[h] = before + (share - before) / 4;
    }
  }

  /** A shaft that began or ceased to turn in the window leaves less in it than the teeth have. */
  private fillsWindow(): boolean {
    const { first, last, binHz } = this;
    const { riseS, mask } = this.path.log;
    return (riseS[last & mask]! - riseS[first & mask]!) * binHz > leastFilled;
  }

  /** The image of a harmonic that falls upon a lower one, in `linesHz`, says nothing of itself. */
  private isHidden(h: number, hz: number): boolean {
    const { toothHz, spreadHz, binHz, nyquistHz, linesHz } = this;
    if (h * toothHz < nyquistHz) return false;
    const nearHz = 3 * binHz + h * spreadHz;
    for (let k = 1; k < h; k++) if (Math.abs(linesHz[k]! - hz) < nearHz) return true;
    return false;
  }

  private place(): boolean {
    const { first, last, positions, turn } = this;
    const { log } = this.path;
    if (last - first < 2) return true;
    const usualS = usualIntervalS(log, first, last);
    // Pulses that bounce come again each turn as well.
    if (this.path.channel.sensor.kind !== 'linear' && bounces(log, first, last)) return false;
    const even = isEven(log, first, last, usualS);
    if (!even && !repeats(log, first, last, turn)) return false;
    const middle = (first + last) >> 1;
    const perTooth = positions / turn;
    const earlier = even ? placesBetween(log, first, middle, usualS) : (middle - first) * perTooth;
    const later = even ? placesBetween(log, middle, last, usualS) : (last - middle) * perTooth;
    const startS = log.riseS[first & log.mask]!;
    const middleS = log.riseS[middle & log.mask]!;
    const endS = log.riseS[last & log.mask]!;
    this.toothHz = (earlier + later) / (endS - startS);
    this.spreadHz = Math.abs(later / (endS - middleS) - earlier / (middleS - startS));
    this.turnHz = this.toothHz / positions;
    return true;
  }

  /** Small teeth that come as the mains do are left out, hum may make them; and what noise makes on a line at rest. */
  private learnSwing(): void {
    const { channel, noiseV } = this.path;
    const { kind, supplyV } = channel.sensor;
    const edgesHz = this.edgesHz();
    const isHum = Math.abs(edgesHz - 50) < 0.5 || Math.abs(edgesHz - 60) < 0.5;
    const leastShare = kind !== 'linear' ? leastOfSupply.switching : isHum ? leastOfSupply.hum : 0;
    const leastV = Math.max(leastShare * (supplyV ?? 0), noiseV > 0 ? leastSigmas * noiseV : 0);
    if (!(this.swingV > leastV) || (this.learnt && isHum && this.swingV < this.halfSwingV)) return;
    // What shakes at the band while the shaft stands is not the whole of a tooth.
    if (this.learnt && this.swingV < this.halfSwingV && !this.areTeeth()) return;
    this.halfSwingV = this.swingV / 2;
    this.learnt = true;
  }

  /** So many in an even row that a wheel has made them. */
  private areTeeth(): boolean {
    const turns = this.context.motion.state === 'running';
    return turns && this.teeth >= fewestInRow && this.fillsWindow() && this.locate();
  }

  private readFlanks(first: number, last: number): void {
    const { log, operateV, releaseV } = this.path;
    if (last <= first) return;
    let swing = 0;
    let ways = 0;
    for (let n = first; n < last; n++) {
      swing += log.peakV[n & log.mask]! - log.troughV[n & log.mask]!;
      ways += Math.min(log.riseWayS[n & log.mask]!, log.fallWayS[n & log.mask]!);
    }
    this.swingV = swing / (last - first);
    this.flankS = (((1.6 * this.swingV) / (operateV - releaseV)) * ways) / (last - first);
  }
}

/** One interval is so much shorter than the one before it, and a few of all are. */
const bounce = { ratio: 0.25, share: 0.05 };

function bounces({ riseS, mask }: ToothLog, first: number, last: number): boolean {
  let short = 0;
  for (let n = first + 1; n < last; n++) {
    const beforeS = riseS[n & mask]! - riseS[(n - 1) & mask]!;
    if (riseS[(n + 1) & mask]! - riseS[n & mask]! < bounce.ratio * beforeS) short++;
  }
  return short > bounce.share * (last - first);
}

/** Less swing than this, of the supply and in sigmas, is not of teeth. */
const leastOfSupply = { switching: 0.2, hum: 0.02 };
const leastSigmas = 10;
/** Of the supply, what half the swing of a sensor usually is. Without a supply a fixed band says what is expected. */
const usualHalf = { linear: 0.2, switching: 0.4 };

function expectedHalfSwingV({ channel, operateV, releaseV }: ChannelPath, { settings }: RuleContext): number {
  const { kind, supplyV } = channel.sensor;
  if (supplyV !== null && supplyV > 0)
    return (kind === 'linear' ? usualHalf.linear : usualHalf.switching) * supplyV;
  return settings.band.mode === 'fixed' ? operateV - releaseV : NaN;
}
