/**
 * Speed over a gate that begins and ends on an edge (the M/T method), and the line of best fit through the same edges: both
 * written out, as references for tests. The product's own way through a window is `speed-meter.ts`.
 *
 *     M/T   n = 60 m / (N T), T from the first edge to the first at or after the gate's end
 *     line  slope of place over instant; error of the period s sqrt(12 / (K (K + 1) (K + 2))) for even teeth,
 *           against sqrt(2) s / K from the two ends
 *
 * Sources: Ohmae et al., IEEE Trans. IE-29 (1982) 207-211 (from memory) for M/T; Brown, Schneider and Mulligan 1992 for
 * least squares being the quietest; the error is that of a straight line's slope.
 */
import { got, notFinite, notInstants, notPositive, refused, type Outcome } from '@/signal/statistics/issue';

export type GateSpeed = {
  rpm: number;
  /** Whole periods in the gate, and its length from edge to edge, s. */
  periods: number;
  gateS: number;
  /** Instant that the speed holds for, the gate's middle, s: an even acceleration makes it right there. */
  atS: number;
};

/**
 * Speed from the edges of one gate: it opens at the first edge given and closes at the first edge `leastGateS` later or
 * more.
 * @param positions edges a turn.
 * Issues: bad-setting, too-few (no edge closes the gate), not-finite, not-ascending.
 */
export function gateSpeed(
  edgesS: ArrayLike<number>,
  leastGateS: number,
  positions: number,
): Outcome<GateSpeed> {
  const bad =
    notPositive(leastGateS, 'gate') ??
    notPositive(positions, 'positions a turn') ??
    notInstants(edgesS, 2, 'edge');
  if (bad) return bad;
  for (let k = 1; k < edgesS.length; k++) {
    const gateS = edgesS[k]! - edgesS[0]!;
    if (gateS >= leastGateS)
      return got({
        rpm: (60 * k) / (positions * gateS),
        periods: k,
        gateS,
        atS: edgesS[0]! + gateS / 2,
      });
  }
  return refused('too-few', `no edge closes a gate of ${leastGateS} s`);
}

/** Ratio that a counter makes of it: m whole periods and `ticks` of its clock. Issues: bad-setting. */
export function rpmOfCounts(
  periods: number,
  ticks: number,
  clockHz: number,
  positions: number,
): Outcome<number> {
  return (
    notPositive(periods, 'periods') ??
    notPositive(ticks, 'clock ticks') ??
    notPositive(clockHz, 'clock') ??
    notPositive(positions, 'positions a turn') ??
    got((60 * clockHz * periods) / (positions * ticks))
  );
}

export type LineSpeed = {
  rpm: number;
  /** Standard error, rev/min: from `edgeErrorS` where that is given, else from the scatter about the line. */
  errorRpm: number;
  /** Rms distance of the edges from the line, s, degrees of freedom taken off; 0 for two edges. */
  residualRmsS: number;
  atS: number;
};

/**
 * Line through instant over place (places are exact, instants are not), its slope the mean period.
 * @param places positions passed at each edge, in either direction; null: one an edge. Their sign is the speed's.
 * @param edgeErrorS standard error of one edge, s; NaN: not known (then three edges are needed).
 * Issues: bad-setting, too-few, not-finite, not-ascending, undetermined (all edges at one place).
 */
export function lineSpeed(
  edgesS: ArrayLike<number>,
  places: ArrayLike<number> | null,
  positions: number,
  edgeErrorS = NaN,
): Outcome<LineSpeed> {
  const known = !Number.isNaN(edgeErrorS);
  const bad =
    notPositive(positions, 'positions a turn') ??
    notInstants(edgesS, known ? 2 : 3, 'edge') ??
    (places ? notFinite(places, 'place') : null);
  if (bad) return bad;
  const n = edgesS.length;
  if (places && places.length !== n) return refused('bad-setting', `${places.length} places for ${n} edges`);
  if (known && !(edgeErrorS >= 0 && edgeErrorS <= 1e15))
    return refused('bad-setting', `standard error ${edgeErrorS} s`);
  const place = (k: number) => (places ? places[k]! : k);
  const originS = edgesS[0]!;
  let meanP = 0;
  let meanT = 0;
  for (let k = 0; k < n; k++) {
    meanP += place(k) / n;
    meanT += (edgesS[k]! - originS) / n;
  }
  let pp = 0;
  let tp = 0;
  let tt = 0;
  for (let k = 0; k < n; k++) {
    const p = place(k) - meanP;
    const t = edgesS[k]! - originS - meanT;
    pp += p * p;
    tp += t * p;
    tt += t * t;
  }
  // Time over place has no slope where the place hardly moves: a reversal within the window is no speed.
  if (!(tp * tp > 0.5 * pp * tt))
    return refused('undetermined', 'instants and places lie on no line: a stop or a reversal is among them');
  const periodS = tp / pp;
  let squares = 0;
  for (let k = 0; k < n; k++) squares += (edgesS[k]! - originS - meanT - periodS * (place(k) - meanP)) ** 2;
  const residualRmsS = n > 2 ? Math.sqrt(squares / (n - 2)) : 0;
  const rpm = 60 / (positions * periodS);
  const periodErrorS = (known ? edgeErrorS : residualRmsS) / Math.sqrt(pp);
  return got({
    rpm,
    errorRpm: Math.abs((rpm * periodErrorS) / periodS),
    residualRmsS,
    atS: originS + meanT,
  });
}
