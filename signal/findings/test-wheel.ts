/** Wheels with faults of their own, for the tests beside. Not part of the product. */

export type WheelMade = {
  positions: number;
  missing?: number;
  /** How far a tooth stands off its place, in pitches, and how strong it is, 1 as built; now. */
  placeOf?: (position: number, t: number) => number;
  strengthOf?: (position: number, t: number) => number;
  turnsAt?: (t: number) => number;
};

/** Volts of soft teeth of 2 V on 0.65 V, each a raised cosine about the middle of its place. */
export function wheelVolts({
  positions,
  missing = 0,
  placeOf = () => 0,
  strengthOf = () => 1,
  turnsAt = (t) => 10 * t,
}: WheelMade): (t: number) => number {
  return (t) => {
    const place = turnsAt(t) * positions;
    const nearest = Math.floor(place);
    let volts = 0.65;
    for (let k = nearest - 1; k <= nearest + 1; k++) {
      const position = ((k % positions) + positions) % positions;
      if (position >= positions - missing) continue;
      const d = place - k - 0.5 - placeOf(position, t);
      if (Math.abs(d) < 0.5) volts += strengthOf(position, t) * (1 + Math.cos(2 * Math.PI * d));
    }
    return volts;
  };
}
