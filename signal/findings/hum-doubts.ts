/** What a tone near the mains may be instead of hum. */
import type { ChannelPath } from '@/signal/channel-path';
import type { Tone } from '@/signal/findings/hum-tone';
import { foldedMirror, mirrorOf, mostAt, sideOrders } from '@/signal/findings/slow-lines';
import { sizeAt } from '@/signal/findings/slow-spectrum';
import type { SlowSpectra, Spectrum } from '@/signal/findings/slow-spectrum';
import type { SlowWheel } from '@/signal/findings/slow-wheel';

/** As near as this to a multiple of the shaft's frequency the two cannot be told apart, Hz. */
export const onOrderHz = 0.15;
/** Grids keep their frequency within 0.2 Hz; the rest is for what lies beside the tone and for its harmonics. */
export const reachHz = 0.35;

/** What the teeth have on either side of them is their own. */
export function isPaired(spectra: SlowSpectra, spectrum: Spectrum, bin: number): boolean {
  const { wheel } = spectrum;
  const mirrorHz = mirrorOf(wheel, bin * wheel.binHz, 1);
  return spectra.sizeNear(spectrum, mirrorHz) > 0.6 * sizeAt(spectrum, bin);
}

/** A side band of the teeth, or of what they fold to, has another one on their other side. */
export function isSideBand(spectra: SlowSpectra, spectrum: Spectrum, tone: Tone): boolean {
  const { wheel } = spectrum;
  const isThere = (mirrorHz: number) => 3 * spectra.sizeNear(spectrum, mirrorHz) > tone.amplitudeV;
  if (isThere(mirrorOf(wheel, tone.hz))) return true;
  const { toothHz, turnHz, spreadHz, binHz, nyquistHz } = wheel;
  // Teeth that change their pace come by everywhere. Whether an order of the shaft is hum is not told by what folds to it.
  const isOrder = Math.abs(tone.hz - turnHz * Math.round(tone.hz / turnHz)) < onOrderHz;
  if (isOrder || spreadHz > binHz / 2 || toothHz + sideOrders * turnHz < nyquistHz) return false;
  for (let h = 1; h <= 3; h++) {
    for (let order = -sideOrders; order <= sideOrders; order++) {
      if (isThere(foldedMirror(wheel, tone.hz, h, order))) return true;
    }
  }
  return false;
}

/** No line of the teeth is so large there that it may beat with the tone. */
export function isFree(wheel: SlowWheel, { hz, amplitudeV }: Tone): boolean {
  return 2 * mostAt(wheel, hz) < amplitudeV;
}

/** Of an order of the wheel; 0 for the mean and for the teeth themselves. */
export function orderSize({ re, im, wheel }: Spectrum, order: number, binHz: number): number {
  if (order % wheel.positions === 0) return 0;
  const bin = Math.round((order * wheel.turnHz) / binHz);
  return bin < re.length - 1 ? Math.hypot(re[bin]!, im[bin]!) : 0;
}

/** Edges at the mains' own pace, from a swing less than half of what the teeth had before: hum may make them itself. */
export function looksLikeEdges(path: ChannelPath, wheel: SlowWheel, tone: Tone): boolean {
  const { supplyV } = path.channel.sensor;
  return (
    wheel.learnt &&
    supplyV !== null &&
    supplyV > 0 &&
    wheel.swingV < wheel.halfSwingV &&
    Math.abs(wheel.toothHz - tone.hz) < reachHz &&
    wheel.spreadHz < reachHz
  );
}

/**
 * Neighbouring samples differ as if by noise, and yet there is none of it beside the tone: the ring holds the image of
 * something above half its rate, a wheel perhaps that turns too fast for its edges to be found. (Ten bins of white noise
 * reach 0.14 of its rms.)
 */
export function isAnImage(noiseV: number, besideV: number, { amplitudeV }: Tone): boolean {
  return noiseV > 0.1 * amplitudeV && besideV < 0.03 * noiseV + 0.003 * amplitudeV;
}
