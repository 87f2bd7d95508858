/** What stands behind `npm run accuracy --`. */
import type { Result } from '@/signal/model';

export type Asked = { seed: number | null; rounds: number; only: string | null };

const usage = 'usage: npm run accuracy -- [--seed N] [--rounds N] [--only WORD]';

export function optionsOf(args: readonly string[]): Result<Asked, string> {
  const asked: Asked = { seed: null, rounds: 1, only: null };
  for (let i = 0; i < args.length; i += 2) {
    const name = args[i]!;
    const value = args[i + 1];
    const whole = value !== undefined && /^\d+$/.test(value) ? Number(value) : NaN;
    if (name === '--seed' && whole < 2 ** 31) asked.seed = whole;
    else if (name === '--rounds' && whole >= 1) asked.rounds = whole;
    else if (name === '--only' && value) asked.only = value.toLowerCase();
    else return { ok: false, issue: `${name} ${value ?? ''} is not understood\n${usage}` };
  }
  return { ok: true, value: asked };
}
