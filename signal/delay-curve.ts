/**
 * Phase delay as a function of frequency, asked at every edge: a table of 160 points an octave, filled where it is first
 * asked for, straight between its points. Place and octave come from the number's own binary form, without a logarithm.
 */
import type { Section } from '@/signal/filter-design';
import { phaseDelayS } from '@/signal/response';

export type DelayCurve = { sections: readonly Section[]; rateHz: number; tableS: Float64Array };

const perOctave = 160;
/** Octaves below half the rate. */
const octaves = 27;
const lowestShare = 2 ** -(octaves + 1);
const highestShare = 0.4999;
/** By leading zeros of the share of the rate in 32 bits: what brings the share to 1..2. */
const toUnit = Float64Array.from({ length: 33 }, (_, zeros) => 2 ** (zeros + 1));

/** The curve of one chain at one rate; without sections no delay at any frequency. */
export function createDelayCurve(sections: readonly Section[], rateHz: number): DelayCurve {
  return {
    sections,
    rateHz,
    tableS: new Float64Array(sections.length === 0 ? 0 : octaves * perOctave + 1).fill(NaN),
  };
}

/** Phase delay at `ofRate` times the rate, s. */
export function delayAt(curve: DelayCurve, ofRate: number): number {
  const { tableS } = curve;
  if (tableS.length === 0) return 0;
  const share = Math.min(highestShare, Math.max(lowestShare, ofRate));
  const zeros = Math.clz32(share * 4294967296);
  const within = (share * toUnit[zeros]! - 1) * perOctave;
  const below = (octaves - zeros) * perOctave + Math.floor(within);
  if (Number.isNaN(tableS[below]! + tableS[below + 1]!)) fillDelay(curve, below);
  const low = tableS[below]!;
  return low + (tableS[below + 1]! - low) * (within - Math.floor(within));
}

function fillDelay(curve: DelayCurve, below: number): void {
  for (let k = below; k <= below + 1; k++) {
    const octave = Math.floor(k / perOctave);
    const share = lowestShare * 2 ** octave * (1 + (k % perOctave) / perOctave);
    const hz = Math.min(highestShare, share) * curve.rateHz;
    curve.tableS[k] = phaseDelayS(curve.sections, hz, curve.rateHz);
  }
}
