/** The same work with fili's own `singleStep` and a plain edge loop. Prints JSON. */
import * as filiModule from 'fili';
import { signalCase } from '@/tests/bench/signal-data';
import { readCodes, timePasses } from '@/tests/bench/signal-passes';
import type { PassResult } from '@/tests/bench/signal-passes';

type SingleStep = { singleStep(volts: number): number };
type Fili = {
  CalcCascades: new () => { lowpass(params: object): object[] };
  IirFilter: new (sections: object[]) => SingleStep;
};
const module = filiModule as unknown as { default?: Fili } & Fili;
const fili = module.default ?? module;

const codes = readCodes();

function pass(): PassResult {
  const { rateHz, cutoffHz, voltsPerCode, operateV, releaseV, teeth } = signalCase;
  const params = { order: 2, characteristic: 'butterworth', Fs: rateHz, Fc: cutoffHz };
  const filter = new fili.IirFilter(new fili.CalcCascades().lowpass(params));
  const mid = (operateV + releaseV) / 2;
  let edges = 0;
  let speedSum = 0;
  let before = 0;
  let middle = 0;
  let last = -1;
  let high = false;
  for (let i = 0; i < codes.length; i += 1) {
    const volts = filter.singleStep((codes[i] as number) * voltsPerCode);
    if (before < mid && volts >= mid) middle = i - 1 + (mid - before) / (volts - before);
    if (!high && volts >= operateV) {
      high = true;
      edges += 1;
      if (last >= 0) speedSum += (60 * rateHz) / (teeth * (middle - last));
      last = middle;
    } else if (high && volts <= releaseV) high = false;
    before = volts;
  }
  return { edges, speedSum };
}

timePasses(codes.length, pass);
