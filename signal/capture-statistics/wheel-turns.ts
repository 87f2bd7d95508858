/** Teeth of a stretch sorted into whole turns of the wheel, its missing positions known by their gap. */
import type { Wheel } from '@/signal/model';

/** Whole turns, one after another: `teethS[turn * (teeth + 1)]` ... each with the next turn's first tooth at its end. */
export type WheelTurns = {
  turns: number;
  /** Teeth that are there in one turn. */
  teeth: number;
  /** `turns * teeth + 1` instants, s. */
  teethS: number[];
};

/**
 * @param teethS instants of one flank, none left out and none too many, s.
 * @returns null where there is no whole turn, or where a turn has not the teeth that the wheel has.
 */
export function wheelTurns(
  teethS: readonly number[],
  { pulsesPerTurn, missingPulses }: Wheel,
): WheelTurns | null {
  const teeth = pulsesPerTurn - missingPulses;
  const first = missingPulses === 0 ? 0 : firstAfterGap(teethS, teeth, missingPulses);
  if (first < 0) return null;
  const turns = Math.floor((teethS.length - 1 - first) / teeth);
  if (turns < 1) return null;
  const own = teethS.slice(first, first + turns * teeth + 1);
  if (missingPulses > 0 && !gapsFit(own, teeth, missingPulses)) return null;
  return { turns, teeth, teethS: own };
}

/** Largest interval of the first turn: the gap is the only one that is longer by the missing teeth. */
function firstAfterGap(teethS: readonly number[], teeth: number, missing: number): number {
  for (let k = 1; k < Math.min(teethS.length - 1, teeth + 1); k++) {
    const before = k > 1 ? teethS[k - 1]! - teethS[k - 2]! : teethS[k + 1]! - teethS[k]!;
    if (teethS[k]! - teethS[k - 1]! > Math.sqrt(missing + 1) * before) return k;
  }
  return -1;
}

function gapsFit(teethS: readonly number[], teeth: number, missing: number): boolean {
  for (let k = 1; k < teethS.length; k++) {
    const long = teethS[k]! - teethS[k - 1]!;
    const before = k > 1 ? teethS[k - 1]! - teethS[k - 2]! : teethS[k + 1]! - teethS[k]!;
    if (k % teeth === 0 ? !(long > Math.sqrt(missing + 1) * before) : long > (missing + 1) * before)
      return false;
  }
  return true;
}
