/** Headers of every answer: what a page of ours may load, and that nobody frames it, sniffs it or learns its address. */
import helmet from 'helmet';
import type { RequestHandler } from 'express';
import type { ServerConfig } from '@/server/config/config';

/** React Native's web layer writes its styles into the page at run time: styles may be inline, scripts never. */
export function securityHeaders(config: Pick<ServerConfig, 'publicUrl'>): RequestHandler {
  const https = config.publicUrl?.protocol === 'https:';
  return helmet({
    contentSecurityPolicy: {
      useDefaults: false,
      directives: {
        defaultSrc: ["'self'"],
        scriptSrc: ["'self'"],
        scriptSrcAttr: ["'none'"],
        styleSrc: ["'self'", "'unsafe-inline'"],
        imgSrc: ["'self'", 'data:', 'blob:'],
        fontSrc: ["'self'", 'data:'],
        connectSrc: https ? ["'self'", 'wss:'] : ["'self'", 'ws:', 'wss:'],
        objectSrc: ["'none'"],
        baseUri: ["'none'"],
        formAction: ["'self'"],
        frameAncestors: ["'none'"],
        ...(https ? { upgradeInsecureRequests: [] } : {}),
      },
    },
    referrerPolicy: { policy: 'no-referrer' },
    strictTransportSecurity: https ? { maxAge: 365 * 24 * 3600 } : false,
    // On plain http these two only fill the console with complaints.
    crossOriginOpenerPolicy: https ? { policy: 'same-origin' } : false,
    originAgentCluster: https,
    frameguard: { action: 'deny' },
  });
}

/** Nothing of the API may be kept by a cache between us and the reader. */
export const noStore: RequestHandler = (_req, res, next) => {
  res.set('Cache-Control', 'no-store');
  next();
};
