import { createHash, timingSafeEqual } from 'node:crypto';
import { Router, type RequestHandler } from 'express';
import { z } from 'zod';
import { notFound, unauthenticated } from '../errors.js';
import type { Context } from '../lib/context.js';
import { createMetrics, type Metrics } from '../lib/metrics.js';
import type { Operation } from '../lib/openapi/operation.js';
import { asGuard } from '../middleware/guard.js';
import { validate } from '../middleware/validate.js';
import { countPendingMail } from '../queries/count-pending-mail.js';

/** `/metrics` for whoever holds the metrics token; without one configured there is none. */
export function metricsRoutes(context: Context, projectorLagMs: () => Promise<number>): Router {
  const router = Router();
  const token = context.env.metricsToken;
  const metrics =
    token === null
      ? null
      : createMetrics({ projectorLagMs, outboxPending: () => countPendingMail(context.db) });
  if (metrics) router.use(timeRequests(metrics));
  router.get('/metrics', requireMetricsToken(token), validate({}), async (_request, response) => {
    if (!metrics) throw notFound();
    response.set('Cache-Control', 'no-store').type(metrics.registry.contentType);
    response.send(await metrics.registry.metrics());
  });
  return router;
}

function requireMetricsToken(token: string | null): RequestHandler {
  return asGuard((request, _response, next) => {
    if (token === null) throw notFound('There is nothing at this address.');
    const [, given = ''] = /^bearer\s+(.+)$/i.exec(request.headers.authorization ?? '') ?? [];
    if (!timingSafeEqual(digest(given), digest(token))) {
      throw unauthenticated('The metrics token is missing or not right.');
    }
    next();
  });
}

const digest = (text: string) => createHash('sha256').update(text).digest();

/** Labels by the route's pattern, never by the address: ids would make a series each. */
function timeRequests({ requestSeconds }: Metrics): RequestHandler {
  return (request, response, next) => {
    const stop = requestSeconds.startTimer();
    response.on('finish', () => {
      const route = (request.route as { path?: string } | undefined)?.path ?? 'other';
      stop({ method: request.method, route, status: String(response.statusCode) });
    });
    next();
  };
}

export const metricsOperations: Operation[] = [
  {
    method: 'get',
    path: '/metrics',
    summary: 'Tell the numbers of this process as Prometheus text',
    tag: 'metrics',
    access: 'metrics',
    response: z.string(),
    responseType: 'text/plain',
  },
];
