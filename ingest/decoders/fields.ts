/** The rules for a block's fields, in one place for every format. Each gives what is wrong, or undefined. */
import { blockLimits } from '../block';
import { quoted } from './result';

/** Whether a text is empty or longer than so many characters (code points). */
function lengthFault(text: string, maxChars: number): boolean {
  if (text.length === 0 || text.length > 2 * maxChars) return true;
  return text.length > maxChars && Array.from(text).length > maxChars;
}

export function streamFault(stream: string): string | undefined {
  return lengthFault(stream, blockLimits.maxStreamChars)
    ? `\`stream\` must have 1 to ${blockLimits.maxStreamChars} characters.`
    : undefined;
}

export function seqFault(seq: number): string | undefined {
  return Number.isInteger(seq) && seq >= 0 && seq <= blockLimits.maxSeq
    ? undefined
    : `\`seq\` must be a whole number from 0 to ${blockLimits.maxSeq}.`;
}

export function rateFault(rateHz: number): string | undefined {
  return rateHz >= blockLimits.minRateHz && rateHz <= blockLimits.maxRateHz
    ? undefined
    : `\`rate\` must be a number from ${blockLimits.minRateHz} to ${blockLimits.maxRateHz} Hz.`;
}

export function timeFault(timeS: number): string | undefined {
  return Number.isFinite(timeS) ? undefined : '`time` must be a finite number of seconds.';
}

export function channelNameFault(name: string): string | undefined {
  return lengthFault(name, blockLimits.maxChannelNameChars)
    ? `The channel name ${quoted(name)} must have 1 to ${blockLimits.maxChannelNameChars} characters.`
    : undefined;
}

/** What is wrong with a sample in volts: NaN, infinite, or beyond what any input of a board can have. */
export function voltsFault(volts: number): string | undefined {
  if (Math.abs(volts) <= blockLimits.maxVolts) return undefined;
  return Number.isFinite(volts)
    ? `A sample of ${volts.toPrecision(3)} V is beyond ${blockLimits.maxVolts} V: floats are volts, codes are integers.`
    : 'A sample is NaN or infinite.';
}

/** Index of the first sample for which `voltsFault` says something, or -1. */
export function firstNoVolts64(samples: Float64Array): number {
  for (let i = 0; i < samples.length; i++) if (!(Math.abs(samples[i]!) <= blockLimits.maxVolts)) return i;
  return -1;
}

/** As `firstNoVolts64`; a function of its own so that each stays fast for its one array type. */
export function firstNoVolts32(samples: Float32Array): number {
  for (let i = 0; i < samples.length; i++) if (!(Math.abs(samples[i]!) <= blockLimits.maxVolts)) return i;
  return -1;
}

/** Codes of a plain array as int32, or the index of the first that is none. */
export function toCodes(samples: Float64Array): Int32Array | number {
  const codes = new Int32Array(samples.length);
  for (let i = 0; i < samples.length; i++) {
    const v = samples[i]!;
    if ((v | 0) !== v) return i;
    codes[i] = v;
  }
  return codes;
}
