/**
 * A comparator with an operate and a release point on an open drain. Edges fall between samples, where the field passes
 * the point, so that they are not tied to the sample clock.
 */
import type { ChannelEffects } from '@/simulator/fault-effects';
import { createLine, type LineSpec } from '@/simulator/line';
import { uniformAt } from '@/simulator/random';

export type SwitchingSensor = LineSpec & {
  kind: 'switch' | 'latch' | 'omnipolar';
  operateMt: number;
  releaseMt: number;
};

/** Volts of the sensor's own output at sample `index`; to be called once a sample, in order. */
export type SensorCore = (
  fieldMt: number,
  index: number,
  supplyRatio: number,
  effects: ChannelEffects,
  /** The field a quarter of a position further back, mT. */
  quarterMt: number,
) => number;

export function createSwitching(spec: SwitchingSensor, stepS: number, seed: number): SensorCore {
  const line = createLine(spec, stepS);
  const chatterSeed = seed ^ 0x2545f491;
  const stepV = spec.pullUpV - spec.lowV;
  let closed = false;
  let before = NaN;
  let sinceS = Infinity;
  return (fieldMt, index, _supplyRatio, effects) => {
    const field = (spec.kind === 'omnipolar' ? Math.abs(fieldMt) : fieldMt) - effects.pointsMt;
    const point = closed ? spec.releaseMt : spec.operateMt;
    const crosses = closed ? field < point : field > point;
    line.pull(effects.pullUpOhm, effects.pulledToV);
    sinceS += stepS;
    if (crosses) {
      const moved = field - before;
      const late =
        Number.isNaN(before) || moved === 0 ? 0 : Math.min(1, Math.max(0, (field - point) / moved));
      line.settle(closed, (1 - late) * stepS);
      closed = !closed;
      line.settle(closed, late * stepS);
      sinceS = late * stepS;
    } else {
      const chatters = sinceS < effects.bounceS && uniformAt(chatterSeed, index) < 0.5;
      line.settle(chatters ? !closed : closed, stepS);
    }
    before = field;
    return effects.ringShare > 0 ? line.volts + ringV(effects) : line.volts;
  };

  /** Swings beyond the new level first. */
  function ringV({ ringShare, ringHz, ringDecayS }: ChannelEffects): number {
    if (sinceS > 8 * ringDecayS) return 0;
    const swing =
      ringShare * stepV * Math.exp(-sinceS / ringDecayS) * Math.sin(2 * Math.PI * ringHz * sinceS);
    return closed ? -swing : swing;
  }
}
