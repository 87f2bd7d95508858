/** How often a password may be tried: by address and by account. Only refused attempts count. */
import { ipKeyGenerator, rateLimit } from 'express-rate-limit';
import type { Request, RequestHandler } from 'express';
import { ApiProblem } from '@/server/http/problems';

export type AttemptLimits = { windowMs: number; perAddress: number; perAccount: number };
export const defaultAttemptLimits: AttemptLimits = {
  windowMs: 15 * 60 * 1000,
  perAddress: 50,
  perAccount: 10,
};

function accountOf(req: Request): string {
  const email: unknown = (req.body as { email?: unknown } | undefined)?.email;
  return typeof email === 'string' ? email.trim().toLowerCase().slice(0, 254) : '';
}

/** Put behind the reader of the body. */
export function attemptLimiters(limits: AttemptLimits): RequestHandler[] {
  const shared = {
    windowMs: limits.windowMs,
    skipSuccessfulRequests: true,
    standardHeaders: false,
    legacyHeaders: false,
    // The package would write its own advice about proxies to the console.
    validate: false,
    handler: (req: Request) => {
      const resetMs = (req as Request & { rateLimit?: { resetTime?: Date } }).rateLimit?.resetTime?.getTime();
      const waitS = Math.max(1, Math.ceil(((resetMs ?? Date.now() + limits.windowMs) - Date.now()) / 1000));
      throw new ApiProblem('too-many-requests', {
        detail: `Too many refused sign-ins. Try again in ${Math.ceil(waitS / 60)} min.`,
        headers: { 'Retry-After': String(waitS) },
      });
    },
  };
  return [
    rateLimit({ ...shared, limit: limits.perAddress, keyGenerator: (req) => ipKeyGenerator(req.ip ?? '') }),
    rateLimit({ ...shared, limit: limits.perAccount, keyGenerator: accountOf }),
  ];
}
