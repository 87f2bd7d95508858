/** The speed of whole turns, which the unevenness of the teeth does not touch. Turns begin at the first tooth given. */
import { got, notCount, notInstants, notPositive, type Outcome } from '@/signal/statistics/issue';

export type TurnSpeeds = {
  turns: number;
  /** End of each turn, s, and its mean speed, rev/min. */
  endS: Float64Array;
  rpm: Float64Array;
};

/**
 * @param teethS instants of one flank, s.
 * @param gearRatio turns of the wheel for one turn of the shaft; `rpm` is the shaft's.
 * Issues: bad-setting, too-few (teethPerTurn + 1 instants are needed), not-finite, not-ascending.
 */
export function speedPerTurn(
  teethS: ArrayLike<number>,
  teethPerTurn: number,
  gearRatio = 1,
): Outcome<TurnSpeeds> {
  const bad =
    notCount(teethPerTurn, 1, 'number of teeth') ??
    notPositive(gearRatio, 'gear ratio') ??
    notInstants(teethS, teethPerTurn + 1, 'tooth');
  if (bad) return bad;
  const turns = Math.floor((teethS.length - 1) / teethPerTurn);
  const endS = Float64Array.from({ length: turns }, (_, turn) => teethS[(turn + 1) * teethPerTurn]!);
  const rpm = endS.map((end, turn) => 60 / (gearRatio * (end - teethS[turn * teethPerTurn]!)));
  return got({ turns, endS, rpm });
}
