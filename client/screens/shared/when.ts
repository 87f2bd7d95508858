/** "14:03" today, "2 Mar 14:03" else, "2 Mar 2025" in another year; in the reader's zone, 12 or 24 hours as usual there. */
export function shortInstant(instant: string, nowMs: number, locale?: string): string {
  const then = new Date(instant);
  const now = new Date(nowMs);
  // "1:47 PM" is one word.
  const time = then.toLocaleTimeString(locale, { timeStyle: 'short' }).replace(/\s/g, '\u00a0');
  if (then.toDateString() === now.toDateString()) return time;
  const sameYear = then.getFullYear() === now.getFullYear();
  const day = then.toLocaleDateString(locale, {
    day: 'numeric',
    month: 'short',
    ...(!sameYear && { year: 'numeric' }),
  });
  return sameYear ? `${day} ${time}` : day;
}

/** The exact instant with its zone, for a press. */
export function exactInstant(instant: string, locale?: string): string {
  return new Date(instant).toLocaleString(locale, { dateStyle: 'full', timeStyle: 'long' });
}

/** "0.4 s", "12 s", "3 min", "5 h", "9 d": how long ago or how long. */
export function shortSpan(seconds: number): string {
  if (seconds < 1) return `${seconds.toFixed(1)} s`;
  if (seconds < 99.5) return `${Math.round(seconds)} s`;
  if (seconds < 5_970) return `${Math.round(seconds / 60)} min`;
  if (seconds < 172_800) return `${Math.round(seconds / 3600)} h`;
  return `${Math.round(seconds / 86_400)} d`;
}
