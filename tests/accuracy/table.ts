/** The table as text. */
import type { Row } from '@/tests/accuracy/section';

const widths = { what: 28, conditions: 106, goal: 36 };

export function heading(section: string): string {
  const { what, conditions, goal } = widths;
  const names = `${'what'.padEnd(what)}  ${'case and conditions'.padEnd(conditions)}  ${'goal'.padEnd(goal)}  measured`;
  return `\n${section.toUpperCase()}\n      ${names}\n`;
}

export function rowLines({ what, conditions, goal, measured, pass }: Row): string {
  const cells = [
    what.padEnd(widths.what),
    conditions.padEnd(widths.conditions),
    goal.padEnd(widths.goal),
    measured,
  ];
  return `${pass ? 'pass' : 'FAIL'}  ${cells.join('  ')}\n`;
}

export function summary(rows: number, missed: readonly string[]): string {
  if (rows === 0) return 'no row matches\n';
  const met = `\n${rows - missed.length} of ${rows} goals met\n`;
  return missed.length === 0 ? met : `${met}missed:\n${missed.map((line) => `  ${line}\n`).join('')}`;
}
