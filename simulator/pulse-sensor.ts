/**
 * A sensor that gives one pulse a tooth, at the tooth's leading flank, as wide as the way it turns: two elements a
 * quarter of a position apart tell the way, and a tooth that swings too little makes the pulse of its own width.
 */
import { createLine } from '@/simulator/line';
import type { SensorCore } from '@/simulator/switching-sensor';

export type PulseSensor = {
  kind: 'pulse';
  operateMt: number;
  releaseMt: number;
  /** Least swing from slot to tooth that counts as sound, mT. */
  weakBelowMt: number;
  widths: { forwardS: number; reverseS: number; weakS: number };
  lowV: number;
  highV: number;
  /** Time constant of the line, either way. */
  lineS: number;
};

export function createPulse(spec: PulseSensor, stepS: number): SensorCore {
  const line = createLine(
    { pullUpV: spec.highV, pullUpOhm: 1, lineFarad: spec.lineS, lowV: spec.lowV },
    stepS,
  );
  const middleMt = (spec.operateMt + spec.releaseMt) / 2;
  line.volts = spec.lowV;
  let armed = false;
  let teeth = 0;
  let before = NaN;
  let leastMt = Infinity;
  let mostMt = -Infinity;
  let swingMt = Infinity;
  let leftS = 0;

  return (fieldMt, _index, _supplyRatio, effects, quarterMt) => {
    const field = fieldMt - effects.pointsMt;
    leastMt = Math.min(leastMt, field);
    mostMt = Math.max(mostMt, field);
    let usedS = 0;
    if (leftS > 0) usedS = hold(Math.min(leftS, stepS));
    if (armed && field > spec.operateMt) {
      const late = Number.isNaN(before) ? 0 : Math.min(1, (field - spec.operateMt) / (field - before));
      const begin = (1 - late) * stepS;
      if (begin > usedS) {
        line.settle(true, begin - usedS);
        usedS = begin;
      }
      armed = false;
      leftS = widthOf(quarterMt);
      usedS += hold(Math.min(leftS, stepS - usedS));
    }
    if (!armed && field < spec.releaseMt) {
      armed = true;
      // What was seen before the first whole tooth is only a part of its swing.
      if (teeth > 0) swingMt = mostMt - leastMt;
      teeth += 1;
      leastMt = Infinity;
      mostMt = -Infinity;
    }
    if (usedS < stepS) line.settle(true, stepS - usedS);
    before = field;
    return line.volts;
  };

  function hold(forS: number): number {
    line.settle(false, forS);
    leftS -= forS;
    return forS;
  }

  /** At the leading flank the second element has seen nothing of the tooth yet, or nearly all of it. */
  function widthOf(quarterMt: number): number {
    if (swingMt < spec.weakBelowMt) return spec.widths.weakS;
    return quarterMt < middleMt ? spec.widths.forwardS : spec.widths.reverseS;
  }
}
