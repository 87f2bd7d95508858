/** The signal of the comparison: a 200 Hz sine of 2 V with noise at 20 kS/s, as int16 codes; the same each time. */
import { normalAt } from '@/simulator/random';

export const signalCase = {
  rateHz: 20_000,
  toneHz: 200,
  cutoffHz: 1000,
  voltsPerCode: 1 / 8192,
  operateV: 0.2,
  releaseV: -0.2,
  teeth: 60,
  /** Five minutes: streams run for hours, and what is made or learnt once at their begin is to weigh little. */
  samples: 6_000_000,
  block: 512,
} as const;

export function makeCodes(): Int16Array {
  const { samples, rateHz, toneHz, voltsPerCode } = signalCase;
  const codes = new Int16Array(samples);
  for (let i = 0; i < samples; i += 1) {
    const volts = 2 * Math.sin((2 * Math.PI * toneHz * i) / rateHz) + 0.1 * normalAt(11, i);
    codes[i] = Math.max(-32768, Math.min(32767, Math.round(volts / voltsPerCode)));
  }
  return codes;
}
