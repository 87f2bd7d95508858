const steps = [5, 10, 20, 60, 120];

/** What can be chosen with so much lookback: the steps that fit, and all of it. */
export function keepChoices(lookbackS: number): { seconds: number; label: string }[] {
  const fitting = steps.filter((s) => s <= Math.max(lookbackS, steps[0]!));
  const choices = fitting.map((seconds) => ({ seconds, label: `${seconds} s` }));
  const all = Math.min(3600, Math.floor(lookbackS));
  return all > fitting.at(-1)! ? [...choices, { seconds: 3600, label: 'all' }] : choices;
}

/** The label of the button: what one press does. */
export function keepWords(seconds: number, lookbackS: number): string {
  if (seconds < 3600) return `Keep the last ${seconds} s`;
  return lookbackS >= 60 ? `Keep all ${lookbackWords(lookbackS)}` : 'Keep all';
}

/** 600 becomes "10 min", 90 "1 min 30 s". */
export function lookbackWords(seconds: number): string {
  const whole = Math.max(0, Math.floor(seconds));
  const minutes = Math.floor(whole / 60);
  const rest = whole % 60;
  if (minutes === 0) return `${whole} s`;
  return rest === 0 ? `${minutes} min` : `${minutes} min ${rest} s`;
}
