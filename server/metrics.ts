/** Figures for an operator's own monitoring, in the Prometheus text format. Numbers only: no name, no key, no value of a signal. */
import { Counter, Histogram, Registry, collectDefaultMetrics } from 'prom-client';
import type { RequestHandler } from 'express';

export type Metrics = {
  registry: Registry;
  countRequests: RequestHandler;
  refusals: Counter<'why'>;
};

export function createMetrics(): Metrics {
  const registry = new Registry();
  collectDefaultMetrics({ register: registry });
  const seconds = new Histogram({
    name: 'turnmark_http_request_seconds',
    help: 'Time from request to answer, s',
    labelNames: ['method', 'status'],
    buckets: [0.005, 0.02, 0.1, 0.5, 2, 10],
    registers: [registry],
  });
  const refusals = new Counter({
    name: 'turnmark_refusals_total',
    help: 'Requests refused for want of a sign-in, a role or a key',
    labelNames: ['why'],
    registers: [registry],
  });
  const countRequests: RequestHandler = (req, res, next) => {
    const done = seconds.startTimer();
    res.once('finish', () => done({ method: req.method, status: String(res.statusCode) }));
    next();
  };
  return { registry, countRequests, refusals };
}
