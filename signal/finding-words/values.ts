/** How numbers stand in the wording of findings. */
export type FindingWords = { message: string; remedy: string };
export type Evidence = Record<string, number | string>;
export type Wording = (channel: string | null, evidence: Evidence) => FindingWords;

/** "3.2 ms" or "1.5 s". */
export function time(seconds: number | string | undefined): string {
  if (typeof seconds !== 'number') return String(seconds);
  if (seconds < 1e-3) return `${short(1e6 * seconds)} us`;
  return seconds < 1 ? `${short(1000 * seconds)} ms` : `${short(seconds)} s`;
}

export function whole(value: number | string | undefined): string {
  return typeof value === 'number' ? Math.round(value).toString() : String(value);
}

/** Three significant digits. */
export function short(value: number | string | undefined): string {
  return typeof value === 'number' ? Number(value.toPrecision(3)).toString() : String(value);
}
