/**
 * What a turning wheel itself puts into the spectrum of the slow ring: harmonics of the tooth frequency and orders of the
 * shaft, folded at half the ring's rate.
 */
import type { ChannelPath } from '@/signal/channel-path';
import { teethPerTurn } from '@/signal/findings/channel-finding';
import type { RuleContext } from '@/signal/findings/rule';
import { firstSince, isEven, placesBetween, repeats, usualIntervalS } from '@/signal/findings/tooth-rows';

const harmonics = 60;
const knownHarmonics = 12;
/** Torque ripples with up to about so many times a turn. */
const sideOrders = 10;
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
  private flankS = 0;
  private isLocated: boolean | null = null;
  /** Usual size of the first harmonics over half the swing; NaN: not seen yet. */
  private readonly usual = new Float64Array(knownHarmonics + 1).fill(NaN);
  private readonly path: ChannelPath;
  private first = 0;
  private last = -1;
  private readonly turn: number;
  /** Of one turn, those without a tooth included. */
  readonly positions: number;
  private readonly binHz: number;
  private readonly nyquistHz: number;

  constructor(context: RuleContext, path: ChannelPath, binHz: number, nyquistHz: number) {
    this.path = path;
    this.turn = teethPerTurn(context, path);
    this.positions = context.rig.wheel.pulsesPerTurn;
    this.binHz = binHz;
    this.nyquistHz = nyquistHz;
    this.halfSwingV = expectedHalfSwingV(path, context);
  }

  /** Takes the teeth of the window; their frequency is found when it is asked for. */
  read(fromS: number): void {
    const { log } = this.path;
    this.last = log.count - 1;
    this.first = firstSince(log, fromS);
    this.toothHz = this.spreadHz = this.turnHz = 0;
    this.swingV = NaN;
    this.isLocated = null;
    this.readFlanks(Math.max(this.first, this.last - 16), this.last);
    this.learnSwing();
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
    if (this.teeth < 3 || this.teeth > mostTeeth || !this.locate()) return;
    const { usual, toothHz, spreadHz, binHz, nyquistHz, halfSwingV } = this;
    for (let h = 1; h <= knownHarmonics; h++) {
      const hz = this.folded(h * toothHz);
      if (h * spreadHz > binHz) return;
      if (hz < 3 * binHz || hz > nyquistHz - 3 * binHz) continue;
      const share = sizeNear(hz) / halfSwingV;
      const before = usual[h]!;
      if (Number.isNaN(before)) usual[h] = share;
      else if (Math.abs(hz - 50) > 3 * binHz && Math.abs(hz - 60) > 3 * binHz)
        usual[h] = before + (share - before) / 4;
    }
  }

  private place(): boolean {
    const { first, last, positions, turn } = this;
    const { log } = this.path;
    if (last - first < 2) return true;
    const usualS = usualIntervalS(log, first, last);
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

  /**
   * A tone at `hz` of no more than this may come from harmonics of the teeth, V: of those seen before half as much again, of
   * others twice what a signal with such flanks can have, all together.
   */
  mostAt(hz: number): number {
    const { halfSwingV, toothHz, spreadHz, turnHz, binHz, flankS } = this;
    if (toothHz === 0) return 0;
    let most = 0;
    for (let h = 1; h <= harmonics; h++) {
      const off = Math.abs(this.folded(h * toothHz) - hz);
      const smearHz = h * spreadHz;
      const on = off < 2 * binHz + smearHz;
      // Beside the first ones stand the orders by which teeth differ; where they can be told apart, see `besideTeeth`.
      if (!on && !(h <= 2 && off < 3 * turnHz && turnHz < 2 * binHz)) continue;
      const known = this.usual[h] ?? NaN;
      let share: number;
      if (on && !Number.isNaN(known)) share = 0.03 + 1.5 * known * lobe(Math.max(0, off - smearHz) / binHz);
      // Of a trapezoid: 4 / (pi h) of a square wave, less beyond 1 / (pi flank).
      else share = ((on ? 2 : 0.5) * 1.27 * Math.min(1, 1 / (Math.PI * h * toothHz * 1.25 * flankS))) / h;
      most += (share * halfSwingV) / Math.max(1, smearHz / (2 * binHz));
    }
    return most;
  }

  /** True where the third order or a nearer one beside a harmonic of the teeth, or its image, comes within `offHz` of `hz`. */
  besideTeeth(hz: number, offHz: number): boolean {
    const { toothHz, turnHz, spreadHz } = this;
    if (toothHz === 0) return false;
    for (let h = 1; h <= 3; h++) {
      for (let k = -3; k <= 3; k++) {
        if (Math.abs(this.folded(h * toothHz + k * turnHz) - hz) < offHz + h * spreadHz) return true;
      }
    }
    return false;
  }

  /**
   * Where the other side band of the teeth stands if a tone at `hz` is one, Hz: a speed that ripples with the turn, and teeth
   * that differ, make both alike. NaN where the tone is too far from the teeth for that.
   */
  mirrorOf(hz: number): number {
    const { toothHz, turnHz, binHz } = this;
    const harmonic = Math.round(hz / toothHz);
    const off = Math.abs(harmonic * toothHz - hz);
    // Nearer than this the teeth themselves fill the place.
    const apart = off > 3.5 * binHz && off < sideOrders * turnHz + 2 * binHz;
    return harmonic > 0 && harmonic <= 3 && apart ? 2 * harmonic * toothHz - hz : NaN;
  }

  /**
   * True where two channels may have something of the wheel in phase: at harmonics of the teeth, at orders beside them, and
   * below four tenths of the tooth frequency, where the sensors stand close together for the shaft. There only what lies
   * clearly between its orders is no part of it.
   */
  makesInCommon(hz: number): boolean {
    const { toothHz, turnHz, spreadHz, binHz } = this;
    if (toothHz === 0) return false;
    for (let h = 1; h <= 16; h++) {
      if (Math.abs(this.folded(h * toothHz) - hz) < 2.5 * binHz + h * spreadHz) return true;
    }
    if (this.besideTeeth(hz, 2 * binHz)) return true;
    if (hz > 0.4 * toothHz) return false;
    return turnHz < 6 * binHz || Math.abs(hz - turnHz * Math.round(hz / turnHz)) < 2.5 * binHz;
  }

  /** True where one of the first harmonics fills that bin; one that is smeared over many is weak in each. */
  fills(bin: number): boolean {
    const { toothHz, binHz, spreadHz } = this;
    if (toothHz === 0) return false;
    for (let h = 1; h <= 6 && h * spreadHz < 5 * binHz; h++) {
      if (Math.abs(this.folded(h * toothHz) - bin * binHz) < 2.5 * binHz + h * spreadHz) return true;
    }
    return false;
  }

  folded(hz: number): number {
    const rate = 2 * this.nyquistHz;
    return Math.abs(hz - rate * Math.round(hz / rate));
  }

  /** Small teeth that come as the mains do are left out: hum may make them. */
  private learnSwing(): void {
    const { kind, supplyV } = this.path.channel.sensor;
    const leastV = kind !== 'linear' && supplyV !== null ? leastOfSupply * supplyV : 0;
    if (!(this.swingV > leastV)) return;
    const edgesHz = this.edgesHz();
    const isHum = Math.abs(edgesHz - 50) < 0.5 || Math.abs(edgesHz - 60) < 0.5;
    if (this.learnt && isHum && this.swingV < this.halfSwingV) return;
    this.halfSwingV = this.swingV / 2;
    this.learnt = true;
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

/** What a tone leaves `off` bins beside itself behind a Hann window, up to two. */
function lobe(off: number): number {
  if (off < 1e-6) return 1;
  if (Math.abs(off - 1) < 1e-6) return 0.5;
  return Math.abs(Math.sin(Math.PI * off) / (Math.PI * off * (1 - off * off)));
}

/** A switching sensor swings over more of its supply than this; what is less, noise made. */
const leastOfSupply = 0.2;
/** Of the supply, what half the swing of a sensor usually is. Without a supply a fixed band says what is expected. */
const usualHalf = { linear: 0.2, switching: 0.4 };

function expectedHalfSwingV({ channel, operateV, releaseV }: ChannelPath, { settings }: RuleContext): number {
  const { kind, supplyV } = channel.sensor;
  if (supplyV !== null && supplyV > 0)
    return (kind === 'linear' ? usualHalf.linear : usualHalf.switching) * supplyV;
  return settings.band.mode === 'fixed' ? operateV - releaseV : NaN;
}
