import compression from 'compression';
import express, { type Express } from 'express';
import type { DemoCase } from './contract/demo-cases.js';
import type { IngestLimits } from './ingest/limits.js';
import type { Context } from './lib/context.js';
import { clientFiles, findClientDirectory } from './middleware/client-files.js';
import { jsonBody } from './middleware/json-body.js';
import { noStore } from './middleware/no-store.js';
import { problemHandler, unknownPath } from './middleware/problem.js';
import type { SignInLimits } from './middleware/rate-limit.js';
import { requestLog } from './middleware/request-log.js';
import { sameOrigin } from './middleware/same-origin.js';
import { securityHeaders } from './middleware/security-headers.js';
import { administrationRouters, allOperations, portalRouters } from './routes/all-routes.js';
import { demoCasesRoutes } from './routes/demo-cases.js';
import { demoMailboxPages } from './routes/demo-mailbox.js';
import { healthRoutes } from './routes/health.js';
import { ingestHeartbeatRoutes } from './routes/ingest-heartbeat.js';
import { ingestReportsRoutes } from './routes/ingest-reports.js';
import { ingestRoutes } from './routes/ingest.js';
import { metricsRoutes } from './routes/metrics.js';
import { openapiRoutes } from './routes/openapi.js';
import { sessionRoutes } from './routes/session.js';

/** What is not the same for every server: the projector's lag, limits, the client, the demo. */
export interface AppParts {
  projectorLagMs?: () => Promise<number>;
  limits?: { signIn?: SignInLimits; ingest?: Partial<IngestLimits> };
  /** null: no screens are served. The build's own place when absent. */
  clientDirectory?: string | null;
  /** What the demo shows, and where; the invented region stands on a floor above the routes. */
  demoCases?: readonly DemoCase[];
}

/** The whole web server, not yet listening: everything a request meets, in order. */
export function createApp(context: Context, parts: AppParts = {}): Express {
  const { env, logger } = context;
  const lag = parts.projectorLagMs ?? (() => Promise.resolve(0));
  const client =
    parts.clientDirectory === undefined ? findClientDirectory() : parts.clientDirectory;
  const isHttps = env.publicUrl.startsWith('https:');
  const app = express();
  app.disable('x-powered-by');
  // We speak no TLS ourselves: published as https, a proxy beside us knows who asks.
  app.set('trust proxy', isHttps ? 'loopback, uniquelocal' : false);
  app.set('query parser', 'simple');

  app.use(requestLog(logger));
  app.use(securityHeaders({ https: isHttps }));
  app.use(metricsRoutes(context, lag));
  app.use('/api', noStore);
  app.use('/api', healthRoutes(context, lag));
  app.use('/api', ingestRoutes(context, parts.limits?.ingest));
  app.use('/api', ingestReportsRoutes(context, parts.limits?.ingest));
  app.use('/api', ingestHeartbeatRoutes(context, parts.limits?.ingest));

  app.use(sameOrigin(env.publicUrl));
  app.use(compression({ filter: isCompressible }));
  // Larger bodies, read only after the sign-in.
  for (const router of administrationRouters(context)) app.use('/api', router);

  app.use(jsonBody(100_000));
  app.use('/api', sessionRoutes(context, parts.limits?.signIn));
  for (const router of portalRouters(context, lag)) app.use('/api', router);
  app.use('/api', demoCasesRoutes(context, parts.demoCases ?? []));
  app.use('/api', openapiRoutes(context, allOperations));
  app.use('/api', unknownPath);

  app.use(demoMailboxPages(context));
  if (client) app.use(clientFiles(client));
  app.use(unknownPath);
  app.use(problemHandler(logger));
  return app;
}

/** Event streams must not wait in a compressor for more to come. */
function isCompressible(request: express.Request, response: express.Response): boolean {
  const type = String(response.getHeader('Content-Type') ?? '');
  return !type.startsWith('text/event-stream') && compression.filter(request, response);
}
