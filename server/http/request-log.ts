/** One line a request: what, how it ended, how long. Paths only, no queries, no headers, so that no secret can slip in. */
import { pinoHttp } from 'pino-http';
import type { RequestHandler } from 'express';
import type { Logger } from '@/server/logger';

export function requestLog(log: Logger): RequestHandler {
  return pinoHttp({
    logger: log,
    autoLogging: { ignore: (req) => /^\/(healthz|readyz|metrics)$/.test(req.url ?? '') },
    customLogLevel: (req, res, error) => {
      if (error || res.statusCode >= 500) return 'error';
      // Within a mounted router `url` is cut; the whole one says which door it was.
      const { originalUrl = '' } = req as { originalUrl?: string };
      return originalUrl.startsWith('/ingest/') ? 'debug' : 'info';
    },
    serializers: {
      req: (req: { method: string; url: string; remoteAddress?: string }) => ({
        method: req.method,
        path: req.url.split('?')[0],
        from: req.remoteAddress,
      }),
      res: (res: { statusCode: number }) => ({ status: res.statusCode }),
    },
  });
}
