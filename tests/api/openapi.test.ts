import request from 'supertest';
import { expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { allOperations } from '../../server/routes/all-routes.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';

const db = useTestDatabase();
const app = createApp(buildContext(db), { clientDirectory: null });

interface Told {
  operationId: string;
  parameters?: { in: string; name: string; required?: boolean }[];
  security: object[];
}

async function toldPaths(): Promise<Record<string, Record<string, Told>>> {
  const { body } = await request(app).get('/api/openapi.json').expect(200);
  expect(body.openapi).toBe('3.1.0');
  return body.paths;
}

test('the document tells every route, each under a name of its own', async () => {
  const told = Object.values(await toldPaths()).flatMap((methods) => Object.values(methods));
  expect(told).toHaveLength(allOperations.length);
  expect(new Set(told.map(({ operationId }) => operationId)).size).toBe(told.length);
});

test('every part of an address is a parameter that must be given', async () => {
  const missing = Object.entries(await toldPaths()).flatMap(([path, methods]) =>
    [...path.matchAll(/{(\w+)}/g)].flatMap(([, name]) =>
      Object.values(methods)
        .filter(
          ({ parameters = [] }) =>
            !parameters.some((one) => one.in === 'path' && one.name === name && one.required),
        )
        .map(({ operationId }) => `${operationId} lacks ${name}`),
    ),
  );
  expect(missing).toEqual([]);
});

test('the schemas that check a request are the ones that are told', async () => {
  const { body } = await request(app).get('/api/openapi.json');
  const sites = body.paths['/api/sites'];
  const limit = sites.get.parameters.find((one: { name: string }) => one.name === 'limit');
  expect(limit.schema).toMatchObject({ type: 'integer', minimum: 1, maximum: 200, default: 50 });
  const sent = sites.post.requestBody.content['application/json'].schema;
  expect(sent.anyOf[0]).toEqual({ $ref: '#/components/schemas/SiteInput' });
  const site = body.components.schemas.SiteInput;
  expect(site.required).toEqual(['code', 'name', 'kind', 'latitude', 'longitude', 'timeZone']);
  expect(site.properties.code.pattern).toBe('^[A-Z0-9]{1,16}$');
  expect(body.components.schemas.Problem.required).toContain('requestId');
});

test('it says which credential a route wants', async () => {
  const paths = await toldPaths();
  expect(paths['/api/health']?.get?.security).toEqual([]);
  expect(paths['/api/sites']?.get?.security).toEqual([{ session: [] }]);
  expect(paths['/api/ingest/reads']?.post?.security).toEqual([{ readerToken: [] }]);
  expect(paths['/api/ingest/reports']?.post?.security).toEqual([{ reportToken: [] }]);
});
