import express, { Router } from 'express';
import request from 'supertest';
import { describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { allOperations } from '../../server/routes/all-routes.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { walkRoutes } from '../support/router-walk.js';

const db = useTestDatabase();

/** Routes that anybody may call, each for its reason. */
const open = [
  'get /api/health', // load balancers ask
  'get /api/openapi.json', // says nothing of anybody
  'post /api/session', // the door itself
  'get /demo/mailbox.css', // the demo's mailbox; not there outside of the demo
  'get /demo/mailbox',
  'get /demo/mailbox/:id',
];
const pages = ['get /demo/mailbox.css', 'get /demo/mailbox', 'get /demo/mailbox/:id'];

describe('every route', () => {
  const routes = walkRoutes(createApp(buildContext(db), { clientDirectory: null }));
  const names = routes.map(({ method, path }) => `${method} ${path}`);

  test('is found by the walk', () => {
    expect(names).toContain('get /api/equipment/:unitId/movements');
    expect(names).toContain('post /api/ingest/reads');
    expect(names).toContain('get /metrics');
    expect(new Set(names).size).toBe(names.length);
  });

  test('is guarded or stands on the short public list', () => {
    const unguarded = routes.filter(({ isGuarded }) => !isGuarded);
    expect(unguarded.map(({ method, path }) => `${method} ${path}`).sort()).toEqual(open.sort());
  });

  test('turns away who is not signed in, before it looks at anything else', async () => {
    const env = { demo: true, metricsToken: 'a token only for metrics' };
    const app = createApp(buildContext(db, { env }), { clientDirectory: null });
    const answers: string[] = [];
    const guarded = routes.filter(({ isGuarded }) => isGuarded);
    for (const { method, path } of guarded) {
      const address = path.replace(/:\w+/g, '1');
      const verb = method as 'get' | 'post' | 'patch' | 'delete';
      const { status, body } = await request(app)[verb](address);
      if (status !== 401 || body.status !== 401) answers.push(`${method} ${path}: ${status}`);
    }
    expect(guarded.length).toBeGreaterThan(40);
    expect(answers).toEqual([]);
  });

  test('is told in the interface document, and nothing else is', () => {
    const told = allOperations.map(({ method, path }) => `${method} ${path}`);
    expect(told.sort()).toEqual(names.filter((name) => !pages.includes(name)).sort());
  });

  test('would be caught without a guard', () => {
    const app = express();
    app.use(
      '/api',
      Router().get('/forgotten', (_request, response) => void response.end()),
    );
    expect(walkRoutes(app)).toEqual([{ method: 'get', path: '/api/forgotten', isGuarded: false }]);
  });
});
