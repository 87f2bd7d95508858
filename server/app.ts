/** The web server's steps, in the order in which a request meets them. */
import { existsSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import express from 'express';
import type { Express } from 'express';
import { getHubValue, setHubValue } from '@/db';
import type { AppContext } from './context';
import { errorHandler } from './http/error-handler';
import { mountRoutes } from './http/mount-routes';
import { ApiProblem } from './http/problems';
import { requestLog } from './http/request-log';
import type { Route } from './http/route';
import { noStore, securityHeaders } from './http/security-headers';
import { compressed, webApp } from './http/web-app';
import { openApiDocument } from './openapi/document';
import { ingestRouter } from './routes/ingest';
import { systemRouter } from './routes/system';

export const version = '0.1.0';

/** The export beside the bundle, or below the source. */
function defaultWebDir(): string {
  const beside = fileURLToPath(new URL('../web', import.meta.url));
  return existsSync(beside) ? beside : fileURLToPath(new URL('../dist/web', import.meta.url));
}

export function createApp(context: AppContext, routes: readonly Route[], webDir = defaultWebDir()): Express {
  const { config, db, clock, log, metrics, authenticate, verifyRigKey, httpIngest } = context;
  const app = express();
  app.disable('x-powered-by');
  app.set('etag', false);
  app.set('trust proxy', config.trustProxy);
  app.set('query parser', 'simple');

  app.use(requestLog(log));
  app.use(metrics.countRequests);
  app.use(securityHeaders(config));
  app.use('/ingest/v1', noStore, ingestRouter({ http: httpIngest, verifyRigKey }));
  app.use(compressed);
  app.use(['/api', '/healthz', '/readyz', '/metrics'], noStore);
  app.use(
    systemRouter({
      metrics,
      document: openApiDocument(routes, version),
      async checkWritable() {
        await setHubValue(db, 'last-ready-check', String(clock.nowMs()));
        await getHubValue(db, 'last-ready-check');
      },
    }),
  );
  app.use('/api/v1', mountRoutes(routes, authenticate));
  app.use(['/api', '/ingest', '/live'], () => {
    throw new ApiProblem('not-found', { detail: 'There is no such address in the API.' });
  });
  app.use(webApp(webDir));
  app.use(() => {
    throw new ApiProblem('not-found');
  });
  app.use(errorHandler(log));
  return app;
}
