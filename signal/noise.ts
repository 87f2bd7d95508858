/**
 * Noise of the raw signal, from short bursts of neighbouring samples, so that it costs next to nothing.
 *
 * A burst's fourth differences (1 -4 6 -4 1, whose white-noise gain is sqrt(70)) hold almost nothing of a signal with
 * more than ten samples a period. Their median size over 0.6745 is robust against the few that touch a flank; the
 * estimate is the median of the last bursts. It is the white part of the noise only: hum and drift are not in it.
 *
 * Nothing below the quantum can be seen: the estimate never falls below quantum / sqrt(12). For codes the quantum is
 * one code, for floats the smallest step seen between neighbours.
 */
export const burstLength = 24;
const differences = burstLength - 4;
const kept = 25;
/** An 8-bit converter of 5 V. */
const coarsestQuantumV = 0.02;
/** Median of |N(0,1)|, and the small-sample bias of the median of 20 overlapping differences (by simulation). */
const medianOfUnit = 0.6745 * 1.007;

export type NoiseMeter = {
  burst: Float64Array;
  filled: number;
  sizes: Float64Array;
  recent: Float64Array;
  sorted: Float64Array;
  seen: number;
  /** Step between neighbouring values, V; 0 where none has been seen. */
  quantumV: number;
  /** Known beforehand (codes): not to be narrowed by what is seen. */
  quantumFixed: boolean;
};

export function createNoiseMeter(): NoiseMeter {
  return {
    burst: new Float64Array(burstLength),
    filled: 0,
    sizes: new Float64Array(differences),
    recent: new Float64Array(kept),
    sorted: new Float64Array(kept),
    seen: 0,
    quantumV: 0,
    quantumFixed: false,
  };
}

/** A burst that a gap cut short is thrown away. */
export function breakBurst(meter: NoiseMeter): void {
  meter.filled = 0;
}

/** `burst` holds a whole burst: it is judged, and the next may begin. */
export function endBurst(meter: NoiseMeter): void {
  meter.filled = 0;
  const { burst, sizes } = meter;
  for (let i = 0; i < differences; i++) {
    sizes[i] = Math.abs(
      burst[i]! - 4 * burst[i + 1]! + 6 * burst[i + 2]! - 4 * burst[i + 3]! + burst[i + 4]!,
    );
  }
  if (!meter.quantumFixed) learnQuantum(meter);
  sortFew(sizes, differences);
  const median = (sizes[differences / 2 - 1]! + sizes[differences / 2]!) / 2;
  meter.recent[meter.seen % kept] = median / (medianOfUnit * Math.sqrt(70));
  meter.seen++;
}

function learnQuantum(meter: NoiseMeter): void {
  const { burst } = meter;
  for (let i = 1; i < burstLength; i++) {
    const step = Math.abs(burst[i]! - burst[i - 1]!);
    // Steps this small are rounding of one and the same value, steps this large the two levels of a switch.
    if (step <= 1e-9 * Math.abs(burst[i]!) || step > coarsestQuantumV) continue;
    if (meter.quantumV === 0 || step < meter.quantumV) meter.quantumV = step;
  }
}

/** Insertion sort: for a couple of dozen numbers ten times faster than the built-in one. */
function sortFew(values: Float64Array, count: number): void {
  for (let i = 1; i < count; i++) {
    const value = values[i]!;
    let j = i - 1;
    for (; j >= 0 && values[j]! > value; j--) values[j + 1] = values[j]!;
    values[j + 1] = value;
  }
}

/** Rms of the raw noise, V, or NaN before the first burst. */
export function rawNoiseV(meter: NoiseMeter): number {
  const count = Math.min(meter.seen, kept);
  if (count === 0) return NaN;
  const { sorted } = meter;
  for (let i = 0; i < count; i++) sorted[i] = meter.recent[i]!;
  sortFew(sorted, count);
  const middle = (sorted[(count - 1) >> 1]! + sorted[count >> 1]!) / 2;
  return Math.max(middle, meter.quantumV / Math.sqrt(12));
}
