/** For those who run the hub: is it up, can it store, its figures, and the API's own description. */
import { Router } from 'express';
import type { Metrics } from '@/server/metrics';
import { docsPage } from '@/server/openapi/docs-page';
import type { OpenApiDocument } from '@/server/openapi/document';

export type SystemDeps = {
  /** Throws where the database cannot be written. */
  checkWritable(): Promise<void> | void;
  metrics: Metrics;
  document: OpenApiDocument;
};

export function systemRouter({ checkWritable, metrics, document }: SystemDeps): Router {
  const page = docsPage(document);
  const json = JSON.stringify(document);
  const router = Router();
  router.get('/healthz', (_req, res) => void res.json({ status: 'up' }));
  router.get('/readyz', async (_req, res) => {
    try {
      await checkWritable();
      res.json({ status: 'ready' });
    } catch {
      res.status(503).json({ status: 'the database cannot be written' });
    }
  });
  router.get('/metrics', async (_req, res) => {
    res.type(metrics.registry.contentType).send(await metrics.registry.metrics());
  });
  router.get('/api/v1/openapi.json', (_req, res) => void res.type('application/json').send(json));
  router.get(['/api/docs', '/api/docs/'], (_req, res) => void res.type('html').send(page));
  return router;
}
