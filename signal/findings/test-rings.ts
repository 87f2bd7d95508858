/** Signals of shafts with one to three channels, for the tests beside. Not part of the product. */
import { normal, seeded } from '@/signal/test-signals';

export type Ring = {
  rateHz: number;
  seconds: number;
  positions: number;
  /** Turns of the shaft at time t, s. */
  turnsAt: (t: number) => number;
  /** Of each channel behind the first, degrees of a tooth. */
  placesDeg: readonly number[];
  /** A sine of 1 V about 1.65 V, or a switch between 0.2 V and 3 V that is high for `duty` of the tooth. */
  shape: 'sine' | { duty: readonly number[] };
  /** Rms of white noise, V. */
  noiseV?: number;
  /** Rms of the teeth's places, share of the pitch. */
  unevenness?: number;
  /** Last word on a channel's volts, for faults. */
  spoil?: (volts: number, channel: number, t: number) => number;
};

export function ringVolts(ring: Ring): Float64Array[] {
  const { rateHz, seconds, positions, placesDeg, shape, noiseV = 0, unevenness = 0, spoil } = ring;
  const random = seeded(7);
  const gauss = normal(random);
  const shifts = Array.from({ length: positions }, () => unevenness * gauss());
  const n = Math.round(seconds * rateHz);
  return placesDeg.map((deg, channel) => {
    const duty = shape === 'sine' ? 0.5 : shape.duty[channel]!;
    return Float64Array.from({ length: n }, (_v, i) => {
      const t = i / rateHz;
      const place = ring.turnsAt(t) * positions - deg / 360;
      const k = Math.floor(place);
      const at = (index: number) => index + shifts[((index % positions) + positions) % positions]!;
      // Between the shifted places of this tooth and the next one.
      const into = (place - at(k)) / (at(k + 1) - at(k));
      const share = into - Math.floor(into);
      const clean = shape === 'sine' ? 1.65 + Math.sin(2 * Math.PI * share) : share < duty ? 3 : 0.2;
      const volts = clean + noiseV * gauss();
      return spoil ? spoil(volts, channel, t) : volts;
    });
  });
}

/** Turns at time t of a shaft whose speed, turns a second, goes in straight lines through the points `[t, speed]`. */
export function speeds(...points: [number, number][]): (t: number) => number {
  return (t) => {
    let turns = 0;
    for (let k = 0; k + 1 < points.length; k++) {
      const [from, before] = points[k]!;
      const [to, after] = points[k + 1]!;
      if (t <= from) break;
      const x = Math.min(t, to) - from;
      turns += before * x + ((after - before) * x * x) / (2 * (to - from));
    }
    const [lastS, last] = points.at(-1)!;
    return t > lastS ? turns + last * (t - lastS) : turns;
  };
}
