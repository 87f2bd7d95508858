/** Interleaved rounds: every variant once a round, so that what slows the machine slows all of them alike. */

export type Figures = Record<string, number>;

export async function interleave<T>(
  rounds: number,
  variants: Record<string, () => Promise<T>>,
): Promise<Record<string, T[]>> {
  const results: Record<string, T[]> = {};
  for (let round = 0; round < rounds; round += 1) {
    for (const [name, run] of Object.entries(variants)) (results[name] ??= []).push(await run());
  }
  return results;
}

export function median(values: readonly number[]): number {
  return quantile(values, 0.5);
}

/** By straight line between the neighbouring ranks. */
export function quantile(values: readonly number[], share: number): number {
  const sorted = [...values].sort((a, b) => a - b);
  const at = share * (sorted.length - 1);
  const low = Math.floor(at);
  const a = sorted[low] ?? NaN;
  return a + ((sorted[Math.min(low + 1, sorted.length - 1)] ?? NaN) - a) * (at - low);
}

/** Median, least and greatest of the ratios of each round. */
export function ratios(upper: readonly number[], lower: readonly number[]): string {
  const each = upper.map((value, i) => value / (lower[i] ?? NaN));
  return `${median(each).toFixed(2)} (${Math.min(...each).toFixed(2)}..${Math.max(...each).toFixed(2)})`;
}

export function line(label: string, figure: string, goal = ''): void {
  process.stdout.write(`  ${label.padEnd(58)} ${figure.padStart(22)}${goal ? `   ${goal}` : ''}\n`);
}

export function heading(text: string): void {
  process.stdout.write(`\n${text}\n`);
}
