import { Router } from 'express';
import { healthSchema } from '../contract/health.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { validate } from '../middleware/validate.js';
import { countPendingMail } from '../queries/count-pending-mail.js';

/** Whether the portal works; 503 when the database is away. */
export function healthRoutes(context: Context, projectorLagMs: () => Promise<number>): Router {
  const router = Router();
  router.get('/health', validate({}), async (_request, response) => {
    const outboxPending = await countPendingMail(context.db);
    response.json({
      status: 'ok',
      database: 'ok',
      projectorLagMs: await projectorLagMs(),
      outboxPending,
    });
  });
  return router;
}

export const healthOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/health',
    summary: 'Say whether the portal works and has caught up',
    access: 'public',
    response: healthSchema,
  },
];
