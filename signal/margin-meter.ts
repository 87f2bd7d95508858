/** How far the worst tooth of the last turns stood beyond the band: least over this turn and the one before. */
export type MarginMeter = {
  toothCount: number;
  turnLength: number;
  thisTurnV: number;
  lastTurnV: number;
};

/** @param turnLength teeth of one turn. */
export function createMarginMeter(turnLength: number): MarginMeter {
  return { toothCount: 0, turnLength, thisTurnV: Infinity, lastTurnV: Infinity };
}

/** @param beyondV peak above operate or release above trough, V; negative where the tooth was not counted. */
export function noteMargin(meter: MarginMeter, beyondV: number): void {
  if (beyondV < meter.thisTurnV) meter.thisTurnV = beyondV;
}

/** A whole tooth is over; after a turn of them a new turn begins. */
export function endTooth(meter: MarginMeter): void {
  if (++meter.toothCount < meter.turnLength) return;
  meter.toothCount = 0;
  meter.lastTurnV = meter.thisTurnV;
  meter.thisTurnV = Infinity;
}

/** V, or NaN before the first tooth. */
export function worstMarginV(meter: MarginMeter): number {
  const worst = Math.min(meter.thisTurnV, meter.lastTurnV);
  return worst === Infinity ? NaN : worst;
}
