export type AdcScaling = { voltsPerCode: number; codeOffset: number; minCode: number; maxCode: number };

/**
 * Scaling of an unsigned converter whose code 2^bits would be its reference voltage: one code is reference / 2^bits.
 * null where bits are not a whole number from 4 to 32 or the reference is not above 0.
 */
export function adcScaling(bits: number | null, referenceV: number | null): AdcScaling | null {
  if (bits === null || referenceV === null || !(referenceV > 0)) return null;
  if (!Number.isInteger(bits) || bits < 4 || bits > 32) return null;
  const voltsPerCode = Number((referenceV / 2 ** bits).toPrecision(12));
  return { voltsPerCode, codeOffset: 0, minCode: 0, maxCode: 2 ** bits - 1 };
}
