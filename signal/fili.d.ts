/** The part of fili 2.0.3 that is used: coefficients of Butterworth low and high pass cascades. */
declare module 'fili' {
  export type FiliSection = { b: [number, number, number]; a: [number, number]; k: number; a0: number };
  /** `order` counts sections of second order. `a` has no leading 1: `y = b0 x + b1 x1 + b2 x2 - a[0] y1 - a[1] y2`. */
  export type FiliParams = { order: number; characteristic: 'butterworth'; Fs: number; Fc: number };
  const Fili: {
    CalcCascades: new () => {
      lowpass(params: FiliParams): FiliSection[];
      highpass(params: FiliParams): FiliSection[];
    };
  };
  export default Fili;
}
