/**
 * Widths of the four states of a quadrature pair. A reference for tests: the product measures its states where they are, this
 * says what they must be for a phase and two duty factors.
 *
 *     A only phi, both 360 D_A - phi, B only phi + 360 (D_B - D_A), none 360 - phi - 360 D_B
 *
 * They hold for any phase when they are taken as what two arcs of the circle have in common, as here.
 * Source: geometry.
 */
import { got, refused, type Outcome } from '@/signal/statistics/issue';

export type StateWidths = {
  aOnlyDeg: number;
  bothDeg: number;
  bOnlyDeg: number;
  noneDeg: number;
  narrowestDeg: number;
};

/** Widths of the four states, degrees of a tooth, sum 360. Duties 0..1. Issues: bad-setting. */
export function stateWidths(phaseDeg: number, dutyA: number, dutyB: number): Outcome<StateWidths> {
  if (!Number.isFinite(phaseDeg)) return refused('bad-setting', `phase ${phaseDeg} degrees`);
  for (const duty of [dutyA, dutyB])
    if (!(duty >= 0 && duty <= 1)) return refused('bad-setting', `duty factor ${duty}`);
  const phase = ((phaseDeg % 360) + 360) % 360;
  const highA = 360 * dutyA;
  const highB = 360 * dutyB;
  // A is high from 0 to highA; B from phase on, and once more from where it wraps round.
  const overlap = (from: number) => Math.max(0, Math.min(highA, from + highB) - Math.max(0, from));
  const bothDeg = overlap(phase) + overlap(phase - 360);
  const widths = {
    aOnlyDeg: highA - bothDeg,
    bothDeg,
    bOnlyDeg: highB - bothDeg,
    noneDeg: 360 - highA - highB + bothDeg,
  };
  return got({ ...widths, narrowestDeg: Math.max(0, Math.min(...Object.values(widths))) });
}
