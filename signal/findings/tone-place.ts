/** What frequency a tone of a slow ring may be: what lies above half its rate has folded down. */
import type { BurstTone } from '@/signal/findings/burst-tone';
import { burstLength } from '@/signal/noise';

/** Where a tone of `hz` shows among `rateHz` samples a second. */
export function foldedHz(hz: number, rateHz: number): number {
  return Math.abs(hz - rateHz * Math.round(hz / rateHz));
}

/** True where the mains or one of their first harmonics shows within `offHz` of `hz` among `rateHz` samples a second. */
export function isMains(hz: number, rateHz: number, offHz: number): boolean {
  for (const mainsHz of [50, 60])
    for (let h = 1; h <= 4; h++) if (Math.abs(foldedHz(h * mainsHz, rateHz) - hz) < offHz) return true;
  return false;
}

/** Slower than so many cycles a burst shows a part of a cycle only, and proves nothing. */
const fewestCycles = 1.5;
/** A burst shows at least this much of what it should. */
const leastOfExpected = 0.5;
/** The best one shows so much more than the next, or leaves so much less of the power unexplained. */
const clearly = 1.3;
const left = 1.5;
const leastLeft = 0.02;
/** So near each other it does not matter which. */
const alike = 0.15;

/**
 * What a tone at `hz` of a ring really is, of all that fold there: bursts of neighbouring samples tell.
 * @param ringHz samples a second of the ring. @param rateHz and of the stream. @param mostHz no more than this.
 * @param share of a burst's power that the tone holds.
 * @returns Hz; NaN where several may be that are not nearly the same.
 */
export function unfoldedHz(
  hz: number,
  ringHz: number,
  rateHz: number,
  mostHz: number,
  share: number,
  bursts: BurstTone,
): number {
  const candidates: { hz: number; own: number }[] = [];
  for (let whole = 0; whole - hz <= mostHz; whole += ringHz) {
    for (const oneHz of whole === 0 ? [hz] : [whole - hz, whole + hz]) {
      if (oneHz > mostHz) continue;
      const own = bursts.shareAt(oneHz / rateHz);
      const shows = oneHz * burstLength >= fewestCycles * rateHz;
      if (!shows || own >= leastOfExpected * share) candidates.push({ hz: oneHz, own });
    }
  }
  if (candidates.length === 0) return NaN;
  const best = candidates.reduce((most, one) => (one.own > most.own ? one : most));
  const others = candidates.filter((one) => Math.abs(one.hz / best.hz - 1) > alike);
  const second = others.reduce((most, { own }) => Math.max(most, own), -1);
  if (second < 0 || best.own > clearly * second) return best.hz;
  return 1 - second > left * (1 - best.own) + leastLeft ? best.hz : NaN;
}
