import { z } from 'zod';
import {
  createDocument,
  type ZodOpenApiOperationObject,
  type ZodOpenApiPathsObject,
  type ZodOpenApiResponsesObject,
} from 'zod-openapi';
import type { Operation, OperationAccess } from './operation.js';

const securityOf: Record<OperationAccess, Record<string, string[]>[]> = {
  public: [],
  session: [{ session: [] }],
  reader: [{ readerToken: [] }],
  reporter: [{ reportToken: [] }],
  metrics: [{ metricsToken: [] }],
};

/** The OpenAPI 3.1 document of the given routes; `problem` is the schema of every refusal. */
export function openApiDocument(
  operations: readonly Operation[],
  options: { problem: z.ZodType; cookieName: string; serverUrl: string },
) {
  const paths: ZodOpenApiPathsObject = {};
  for (const operation of operations) {
    const path = templateOf(operation.path);
    const described = describe(operation, options.problem);
    paths[path] = { ...paths[path], [operation.method]: described };
  }
  return createDocument({
    openapi: '3.1.0',
    info: {
      title: 'Fishplate',
      version: '1',
      description: 'Trackside reads in, answers about rail cars and containers out.',
    },
    servers: [{ url: options.serverUrl }],
    paths,
    components: {
      securitySchemes: {
        session: { type: 'apiKey', in: 'cookie', name: options.cookieName },
        readerToken: { type: 'http', scheme: 'bearer', description: 'One token a site.' },
        reportToken: { type: 'http', scheme: 'bearer', description: 'One token an organisation.' },
        metricsToken: { type: 'http', scheme: 'bearer' },
      },
    },
  });
}

/** `/api/sites/:code` as OpenAPI writes it: `/api/sites/{code}`. */
export function templateOf(path: string): string {
  return path.replace(/:(\w+)/g, '{$1}');
}

function describe(operation: Operation, problem: z.ZodType): ZodOpenApiOperationObject {
  const { method, path, summary, access = 'session', params, query, body } = operation;
  const words = path.split('/').filter((part) => part && part !== 'api');
  const parameters = { ...(params && { path: params }), ...(query && { query }) };
  return {
    operationId: [method, ...words.map((word) => word.replace(/\W/g, ' ').trim())]
      .join(' ')
      .replace(/\s+(\w)/g, (_all, letter: string) => letter.toUpperCase()),
    summary,
    tags: [operation.tag ?? words[0] ?? 'other'],
    security: securityOf[access],
    ...(params || query ? { requestParams: parameters } : {}),
    ...(body && {
      requestBody: {
        required: true,
        content: { [operation.bodyType ?? 'application/json']: { schema: body } },
      },
    }),
    responses: responsesOf(operation, problem),
  };
}

function responsesOf(operation: Operation, problem: z.ZodType): ZodOpenApiResponsesObject {
  const { responseType = 'application/json' } = operation;
  const response = operation.response ?? (operation.responseType ? z.string() : undefined);
  const status = operation.status ?? (response ? 200 : 204);
  const good = response
    ? { description: 'Done.', content: { [responseType]: { schema: response } } }
    : { description: 'Done.' };
  return {
    [String(status) as '200']: good,
    default: {
      description: 'Refused; the status says why, `errors` where.',
      content: { 'application/problem+json': { schema: problem } },
    },
  };
}
