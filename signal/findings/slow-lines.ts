/**
 * Which lines a turning wheel puts into the spectrum of the slow ring: harmonics of the tooth frequency and orders of the
 * shaft, folded at half the ring's rate.
 */
import type { SlowWheel } from '@/signal/findings/slow-wheel';
import { foldedHz } from '@/signal/findings/tone-place';

const harmonics = 60;
const lowHarmonics = 8;
/** Nearer to the teeth than this they themselves fill the place. */
const mirrorBins = 3;
/** Torque ripples with up to about so many times a turn. */
export const sideOrders = 10;

/**
 * A tone at `hz` of no more than this may come from harmonics of the teeth, V: of those seen before half as much again, of
 * others twice what a signal with such flanks can have, all together.
 */
export function mostAt(wheel: SlowWheel, hz: number): number {
  const { halfSwingV, toothHz, spreadHz, turnHz, binHz, flankS } = wheel;
  if (toothHz === 0) return 0;
  let most = 0;
  for (let h = 1; h <= harmonics; h++) {
    const off = Math.abs(folded(wheel, h * toothHz) - hz);
    const smearHz = h * spreadHz;
    const on = off < 2 * binHz + smearHz;
    // Beside the first ones stand the orders by which teeth differ; where they can be told apart, see `besideTeeth`.
    if (!on && !(h <= 2 && off < 3 * turnHz && turnHz < 2 * binHz)) continue;
    const known = wheel.usualOf(h);
    let share: number;
    if (on && !Number.isNaN(known)) share = 0.03 + 1.5 * known * lobe(Math.max(0, off - smearHz) / binHz);
    // Of a trapezoid: 4 / (pi h) of a square wave, less beyond 1 / (pi flank).
    else share = ((on ? 2 : 0.5) * 1.27 * Math.min(1, 1 / (Math.PI * h * toothHz * 1.25 * flankS))) / h;
    // A line swept over many bins has its power in all of them, were it swept evenly; high ones are jittered by every tooth besides.
    const bins = Math.max(1, smearHz / (2 * binHz));
    most += (share * halfSwingV) / (h <= lowHarmonics ? Math.sqrt(bins) : bins);
  }
  return most;
}

/** True where the third order or a nearer one beside a harmonic of the teeth, or its image, comes within `offHz` of `hz`. */
export function besideTeeth(wheel: SlowWheel, hz: number, offHz: number): boolean {
  const { toothHz, turnHz, spreadHz } = wheel;
  if (toothHz === 0) return false;
  for (let h = 1; h <= 3; h++) {
    for (let k = -3; k <= 3; k++) {
      if (Math.abs(folded(wheel, h * toothHz + k * turnHz) - hz) < offHz + h * spreadHz) return true;
    }
  }
  return false;
}

/** True where one of the first harmonics stands so near that a tone at `hz` cannot be held against its mirror image. */
export function besideHarmonic({ toothHz, binHz }: SlowWheel, hz: number, bins = mirrorBins): boolean {
  if (toothHz === 0) return false;
  const harmonic = Math.round(hz / toothHz);
  return harmonic > 0 && harmonic <= 3 && Math.abs(harmonic * toothHz - hz) < bins * binHz;
}

/**
 * Where the other side band of the teeth stands if a tone at `hz` is one, Hz: a speed that ripples with the turn, and teeth
 * that differ, make both alike. NaN where the tone is too far from the teeth for that, or nearer than `bins`.
 */
export function mirrorOf(wheel: SlowWheel, hz: number, bins = mirrorBins): number {
  const { toothHz, turnHz, binHz } = wheel;
  const harmonic = Math.round(hz / toothHz);
  const off = Math.abs(harmonic * toothHz - hz);
  const apart = off > bins * binHz && off < sideOrders * turnHz + 2 * binHz;
  return harmonic > 0 && harmonic <= 3 && apart ? 2 * harmonic * toothHz - hz : NaN;
}

/**
 * The same for teeth that fold, of order `order` beside harmonic `h` of the teeth: where its other side band comes to, Hz.
 * NaN where the tone is no such order, or no image.
 */
export function foldedMirror(wheel: SlowWheel, hz: number, h: number, order: number): number {
  const { toothHz, turnHz, spreadHz, binHz } = wheel;
  const sideHz = h * toothHz + order * turnHz;
  if (order === 0 || sideHz < wheel.nyquistHz) return NaN;
  const isThere = Math.abs(folded(wheel, sideHz) - hz) < binHz / 2 + h * spreadHz;
  return isThere ? folded(wheel, h * toothHz - order * turnHz) : NaN;
}

/**
 * True where two channels may have something of the wheel in phase: at harmonics of the teeth, at orders beside them, and
 * below four tenths of the tooth frequency, where the sensors stand close together for the shaft. There only what lies
 * clearly between its orders is no part of it.
 */
export function makesInCommon(wheel: SlowWheel, hz: number): boolean {
  const { toothHz, turnHz, spreadHz, binHz } = wheel;
  if (toothHz === 0) return false;
  for (let h = 1; h <= 16; h++) {
    if (Math.abs(folded(wheel, h * toothHz) - hz) < 2.5 * binHz + h * spreadHz) return true;
  }
  if (besideTeeth(wheel, hz, 2 * binHz)) return true;
  if (hz > 0.4 * toothHz) return false;
  return turnHz < 6 * binHz || Math.abs(hz - turnHz * Math.round(hz / turnHz)) < 2.5 * binHz;
}

/** True where one of the first harmonics fills that bin; one that is smeared over many is weak in each. */
export function fills(wheel: SlowWheel, bin: number): boolean {
  const { toothHz, binHz, spreadHz } = wheel;
  if (toothHz === 0) return false;
  for (let h = 1; h <= 6 && h * spreadHz < 5 * binHz; h++) {
    if (Math.abs(folded(wheel, h * toothHz) - bin * binHz) < 2.5 * binHz + h * spreadHz) return true;
  }
  return false;
}

export function folded(wheel: SlowWheel, hz: number): number {
  return foldedHz(hz, 2 * wheel.nyquistHz);
}

/** What a tone leaves `off` bins beside itself behind a Hann window, up to two. */
function lobe(off: number): number {
  if (off < 1e-6) return 1;
  if (Math.abs(off - 1) < 1e-6) return 0.5;
  return Math.abs(Math.sin(Math.PI * off) / (Math.PI * off * (1 - off * off)));
}
