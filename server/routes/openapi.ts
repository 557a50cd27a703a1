import { Router } from 'express';
import { z } from 'zod';
import { problemSchema } from '../contract/common.js';
import type { Context } from '../lib/context.js';
import { openApiDocument } from '../lib/openapi/document.js';
import type { Operation } from '../lib/openapi/operation.js';
import { sessionCookieName } from '../lib/session-cookie.js';
import { validate } from '../middleware/validate.js';

/** The interface told by itself, out of the schemas that check it. */
export function openapiRoutes({ env }: Context, operations: readonly Operation[]): Router {
  const router = Router();
  let document: string | undefined;
  router.get('/openapi.json', validate({}), (_request, response) => {
    document ??= JSON.stringify(
      openApiDocument(operations, {
        problem: problemSchema,
        cookieName: sessionCookieName(env),
        serverUrl: env.publicUrl,
      }),
    );
    response.type('application/json').send(document);
  });
  return router;
}

export const openapiOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/openapi.json',
    summary: 'Tell the whole interface as OpenAPI 3.1',
    tag: 'interface',
    access: 'public',
    response: z.looseObject({ openapi: z.literal('3.1.0') }),
  },
];
