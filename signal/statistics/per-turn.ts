/**
 * One line a turn: mean, least and most of what was measured tooth by tooth, and the speed of the whole turn, which the
 * unevenness of the teeth does not touch. Turns begin at the first tooth given.
 */
import {
  got,
  notCount,
  notFinite,
  notInstants,
  notPositive,
  refused,
  type Outcome,
} from '@/signal/statistics/issue';

export type TurnColumns = { turns: number; mean: Float64Array; least: Float64Array; most: Float64Array };

/**
 * @param values one a tooth, any unit (swing in V, duty, period in s); a started turn at the end is left out.
 * @param teethPerTurn teeth that are there, not positions.
 * Issues: bad-setting, too-few (no whole turn), not-finite.
 */
export function perTurn(values: ArrayLike<number>, teethPerTurn: number): Outcome<TurnColumns> {
  const bad = notCount(teethPerTurn, 1, 'number of teeth') ?? notFinite(values, 'value');
  if (bad) return bad;
  const turns = Math.floor(values.length / teethPerTurn);
  if (turns === 0) return refused('too-few', `${values.length} teeth are no whole turn of ${teethPerTurn}`);
  const mean = new Float64Array(turns);
  const least = new Float64Array(turns).fill(Infinity);
  const most = new Float64Array(turns).fill(-Infinity);
  for (let turn = 0; turn < turns; turn++) {
    for (let k = 0; k < teethPerTurn; k++) {
      const value = values[turn * teethPerTurn + k]!;
      mean[turn] = mean[turn]! + value / teethPerTurn;
      least[turn] = Math.min(least[turn]!, value);
      most[turn] = Math.max(most[turn]!, value);
    }
  }
  return got({ turns, mean, least, most });
}

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
