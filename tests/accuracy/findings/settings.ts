/** Settings that an engineer would choose for a rig. */
import type { Band, Filter, Settings } from '@/signal/model';
import type { Draw } from '@/tests/accuracy/findings/draw';
import type { DrawnSensor } from '@/tests/accuracy/findings/sensors';

export const fitted: Band = { mode: 'fitted', operateFraction: 0.6, releaseFraction: 0.4 };

export function drawSettings(
  draw: Draw,
  rig: { toothHz: number; rateHz: number; sensor: DrawnSensor; isPlain: boolean; mayBeFixed: boolean },
): Settings {
  // A coded pulse is shorter than any hold-off worth having.
  const holdsOff = draw.chance(0.2) && rig.sensor.sensor.kind !== 'pulse';
  return {
    filter: drawFilter(draw, rig),
    band: rig.mayBeFixed ? drawBand(draw, rig.sensor) : fitted,
    holdoffS: holdsOff ? draw.uniform(0.02, 0.12) / rig.toothHz : 0,
    speed: {
      method: draw.pick(['tooth', 'turn', 'window'] as const),
      windowS: draw.uniform(0.05, 0.3),
      stoppedAfterS: draw.uniform(1, 2.5),
    },
  };
}

/** A low pass well above the teeth where there is room for one; squared signals are left alone. */
function drawFilter(draw: Draw, rig: { toothHz: number; rateHz: number; isPlain: boolean }): Filter {
  const cutoffHz = Math.max(40, rig.toothHz * draw.uniform(4, 8));
  if (!rig.isPlain || cutoffHz > 0.4 * rig.rateHz || draw.chance(0.5)) return { kind: 'none' };
  const family = draw.pick(['butterworth', 'bessel'] as const);
  return { kind: 'lowpass', family, order: draw.pick([2, 4]), cutoffHz };
}

function drawBand(draw: Draw, { lowV, highV }: DrawnSensor): Band {
  if (draw.chance(0.75)) return fitted;
  const at = (share: number) => lowV + share * (highV - lowV);
  return { mode: 'fixed', operateV: at(draw.uniform(0.6, 0.7)), releaseV: at(draw.uniform(0.3, 0.4)) };
}
