import type { z } from 'zod';

/** What is wrong with a field, in words; undefined leaves the contract's own. */
export function issueWords(issue: z.core.$ZodRawIssue): string | undefined {
  switch (issue.code) {
    case 'invalid_type':
      if (issue.input === undefined || Number.isNaN(issue.input)) return 'Enter a number.';
      if (issue.expected === 'int') return 'Enter a whole number.';
      return undefined;
    case 'too_small':
      if (issue.origin === 'string') return 'Enter a name.';
      if (issue.origin === 'array') return undefined;
      return `At least ${String(issue.minimum)}.`;
    case 'too_big':
      return issue.origin === 'string'
        ? `At most ${String(issue.maximum)} characters.`
        : `At most ${String(issue.maximum)}.`;
    default:
      return undefined;
  }
}

/** "must be greater than 0" as a sentence. */
export function sentence(message: string): string {
  const text = `${message.charAt(0).toUpperCase()}${message.slice(1)}`;
  return /[.?:]$/.test(text) ? text : `${text}.`;
}
