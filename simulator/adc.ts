/** The converter: volts to what goes on the wire. */
export type AdcSpec =
  | { kind: 'codes'; bits: number; voltsPerCode: number; codeOffset: number; signed?: boolean }
  | { kind: 'volts' };

export type WireArray = Int16Array | Uint16Array | Float32Array;

/** Lowest and highest code. */
export function codeRange(adc: Extract<AdcSpec, { kind: 'codes' }>): { minCode: number; maxCode: number } {
  const span = 2 ** adc.bits;
  return adc.signed ? { minCode: -span / 2, maxCode: span / 2 - 1 } : { minCode: 0, maxCode: span - 1 };
}

export function createWireArray(adc: AdcSpec, count: number): WireArray {
  if (adc.kind === 'volts') return new Float32Array(count);
  return codeRange(adc).maxCode > 32767 ? new Uint16Array(count) : new Int16Array(count);
}

/** code = round(volts / voltsPerCode + codeOffset), held at the ends of the range. */
export function createConverter(adc: AdcSpec): (volts: number) => number {
  if (adc.kind === 'volts') return (volts) => volts;
  const { minCode, maxCode } = codeRange(adc);
  const codesPerVolt = 1 / adc.voltsPerCode;
  return (volts) => Math.min(maxCode, Math.max(minCode, Math.round(volts * codesPerVolt + adc.codeOffset)));
}
