/**
 * The line of a switching output: pulled up through a resistor, pulled down by a transistor, slowed by the cable's
 * capacitance (one pole each way, the way down 50 times as fast).
 */
export type LineSpec = {
  /** The line is pulled up to this when the output is open (no field: open). */
  pullUpV: number;
  pullUpOhm: number;
  lineFarad: number;
  /** Level of the closed output. */
  lowV: number;
};

export type Line = {
  volts: number;
  /** Lets the line run towards its level for `forS`. */
  settle(closed: boolean, forS: number): void;
  /** Another pull-up from now on; NaN: the one of the spec. */
  pull(ohm: number, upToV: number): void;
};

export function createLine(spec: LineSpec, stepS: number): Line {
  const fallTauS = (spec.pullUpOhm * spec.lineFarad) / 50;
  const wholeFall = Math.exp(-stepS / fallTauS);
  let riseTauS = spec.pullUpOhm * spec.lineFarad;
  let wholeRise = Math.exp(-stepS / riseTauS);
  let highV = spec.pullUpV;
  let ohmNow = NaN;
  const line: Line = {
    volts: spec.pullUpV,
    settle(closed, forS) {
      const target = closed ? spec.lowV : highV;
      if (line.volts === target) return;
      const whole = closed ? wholeFall : wholeRise;
      const left = forS === stepS ? whole : Math.exp(-forS / (closed ? fallTauS : riseTauS));
      line.volts = target + (line.volts - target) * left;
    },
    pull(ohm, upToV) {
      highV = Number.isNaN(upToV) ? spec.pullUpV : upToV;
      if (Object.is(ohm, ohmNow)) return;
      ohmNow = ohm;
      riseTauS = (Number.isNaN(ohm) ? spec.pullUpOhm : ohm) * spec.lineFarad;
      wholeRise = Math.exp(-stepS / riseTauS);
    },
  };
  return line;
}
