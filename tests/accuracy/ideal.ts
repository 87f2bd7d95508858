/** What a rig's signal would be without noise: the measure of signal against noise, and of a flank's slope. */
import { createRig, type RigSpec } from '@/simulator/rig-model';
import { createWheel } from '@/simulator/wheel';

export type Ideal = {
  /** About its mean, over whole turns. */
  rmsV: number;
  swingV: number;
  /** Rms of the flanks' slopes where the field is in its middle, V per position of the wheel; NaN for a switching sensor. */
  slopeV: number;
};

const perPosition = 360;
const step = 1e-4;

/** Of the first channel; the others see the same. Teeth as designed: what a seed draws of their places is no part of it. */
export function idealOf(spec: RigSpec): Ideal {
  const n = spec.wheel.positions;
  // One turn a second, so that samples are places.
  const rig = createRig(
    {
      ...spec,
      rateHz: n * perPosition,
      motion: { startRpm: 60, segments: [{ durationS: 1000, toRpm: 60 }] },
      wheel: { ...spec.wheel, pitchErrorRms: 0 },
      channels: spec.channels.slice(0, 1),
      adc: { kind: 'volts' },
    },
    0,
  );
  // The second turn: a switching sensor has found its state by then.
  const volts = rig.block(n * perPosition, n * perPosition)[0]!;
  let sum = 0;
  let squares = 0;
  let low = Infinity;
  let high = -Infinity;
  for (const v of volts) {
    sum += v;
    squares += v * v;
    low = Math.min(low, v);
    high = Math.max(high, v);
  }
  const mean = sum / volts.length;
  return {
    rmsV: Math.sqrt(squares / volts.length - mean ** 2),
    swingV: high - low,
    slopeV: slopeOf(spec),
  };
}

function slopeOf({ wheel: spec, gapMm, channels }: RigSpec): number {
  const sensor = channels[0]?.sensor;
  if (sensor?.kind !== 'linear') return NaN;
  const wheel = createWheel({ ...spec, pitchErrorRms: 0 }, 0, gapMm);
  const n = wheel.positions;
  const volts = (at: number) => 0.001 * sensor.sensitivityMvPerMt * wheel.fieldMt(at / n, gapMm);
  let squares = 0;
  let flanks = 0;
  for (let k = 0; k < n; k += 1) {
    if (!wheel.present(k)) continue;
    for (const at of [wheel.riseAt(k), wheel.fallAt(k)]) {
      squares += ((volts(at + step) - volts(at - step)) / (2 * step)) ** 2;
      flanks += 1;
    }
  }
  return Math.sqrt(squares / flanks);
}
