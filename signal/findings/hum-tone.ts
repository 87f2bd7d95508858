/** A single tone in a spectrum: where it is, how large, and how far it stands above what lies beside it. */
import { sizeAt } from '@/signal/findings/slow-spectrum';
import type { Spectrum } from '@/signal/findings/slow-spectrum';

export type Tone = { hz: number; amplitudeV: number; bin: number };

/**
 * The tone within `reachHz` of `hz`, or null where nothing peaks there.
 *
 * With r the size of a neighbour of the peak over the peak, a tone behind a Hann window stands d = (2 r - 1) / (r + 1) bins
 * from it towards that neighbour, and is pi d (1 - d^2) / sin(pi d) times its size.
 * Source: Jain, Collins and Davis, IEEE Trans. Instrum. Meas. 28 (1979) 113-122, for the Hann window by T. Grandke, ibid. 32 (1983)
 * 350-355 (both from memory; checked by the test beside).
 */
export function toneNear(spectrum: Spectrum, binHz: number, hz: number, reachHz: number): Tone | null {
  const last = spectrum.re.length - 3;
  const from = Math.max(2, Math.ceil((hz - reachHz) / binHz - 0.5));
  const to = Math.min(last, Math.floor((hz + reachHz) / binHz + 0.5));
  let bin = -1;
  let peak = 0;
  for (let k = from; k <= to; k++) {
    const size = sizeAt(spectrum, k);
    if (size <= peak) continue;
    peak = size;
    bin = k;
  }
  if (bin < 0) return null;
  const below = sizeAt(spectrum, bin - 1);
  const above = sizeAt(spectrum, bin + 1);
  if (below > peak || above > peak) return null;
  // A larger tone two bins away spoils the neighbour on its side.
  const belowSpoilt = sizeAt(spectrum, bin - 2) > peak;
  const aboveSpoilt = sizeAt(spectrum, bin + 2) > peak;
  const byAbove = belowSpoilt || (above > below && !aboveSpoilt);
  const ratio = (byAbove ? above : below) / peak;
  const off = ((byAbove ? 1 : -1) * (2 * ratio - 1)) / (ratio + 1);
  const lost = Math.abs(off) < 1e-6 ? 1 : (Math.PI * off * (1 - off * off)) / Math.sin(Math.PI * off);
  const toneHz = (bin + off) * binHz;
  return Math.abs(toneHz - hz) <= reachHz ? { hz: toneHz, amplitudeV: lost * peak, bin } : null;
}

/**
 * The largest size `nearest` to `furthest` bins beside a tone, on either side. The window itself spreads 0.022 of the tone to
 * three bins, 0.002 to six.
 * @param skip true for bins that something known fills.
 */
export function besideTone(
  spectrum: Spectrum,
  bin: number,
  nearest: number,
  furthest: number,
  skip: (bin: number) => boolean = () => false,
): number {
  const last = spectrum.re.length - 2;
  let most = 0;
  for (let far = nearest; far <= furthest; far++) {
    for (const k of [bin - far, bin + far]) {
      if (k < 1 || k > last || skip(k)) continue;
      most = Math.max(most, sizeAt(spectrum, k));
    }
  }
  return most;
}
