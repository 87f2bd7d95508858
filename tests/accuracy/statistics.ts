/** Figures of a list of numbers. */
export function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}

export function rms(values: readonly number[]): number {
  return Math.sqrt(values.reduce((sum, value) => sum + value * value, 0) / values.length);
}

/** The values less their mean. */
export function centred(values: readonly number[]): number[] {
  const middle = mean(values);
  return values.map((value) => value - middle);
}
