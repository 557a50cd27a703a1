import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import request from 'supertest';
import { afterAll, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';

const db = useTestDatabase();
const clientDirectory = mkdtempSync(path.join(os.tmpdir(), 'fishplate-client-'));
mkdirSync(path.join(clientDirectory, 'assets'));
writeFileSync(path.join(clientDirectory, 'index.html'), '<!doctype html><title>Fishplate</title>');
writeFileSync(path.join(clientDirectory, 'assets', 'main-1.js'), 'export {};');
afterAll(() => rmSync(clientDirectory, { recursive: true }));

const csp =
  "default-src 'self';script-src 'self';style-src 'self';img-src 'self' data:;" +
  "connect-src 'self';object-src 'none';frame-ancestors 'none';base-uri 'none';form-action 'self'";

describe('every answer', () => {
  const app = createApp(buildContext(db), { clientDirectory });

  test.each([
    ['a screen', '/fleet', 200],
    ['an asset', '/assets/main-1.js', 200],
    ['a missing asset', '/assets/none.js', 404],
    ['an answer', '/api/health', 200],
    ['a refusal', '/api/session', 401],
    ['an unknown address', '/api/nothing', 404],
  ])('carries the headers: %s', async (_what, address, status) => {
    const { headers } = await request(app).get(address).expect(status);
    expect(headers['content-security-policy']).toBe(csp);
    expect(headers['x-content-type-options']).toBe('nosniff');
    expect(headers['x-frame-options']).toBe('DENY');
    expect(headers['referrer-policy']).toBe('no-referrer');
    expect(headers).not.toHaveProperty('x-powered-by');
    expect(headers).not.toHaveProperty('strict-transport-security');
    expect(headers['x-request-id']).toMatch(/^[0-9a-f-]{36}$/);
  });

  test('of the interface is kept by no cache', async () => {
    const { headers } = await request(app).get('/api/session').expect(401);
    expect(headers['cache-control']).toBe('no-store');
  });

  test('says https only when it is published so', async () => {
    const env = { publicUrl: 'https://portal.example' };
    const published = createApp(buildContext(db, { env }), { clientDirectory });
    const { headers } = await request(published).get('/api/health').expect(200);
    expect(headers['strict-transport-security']).toContain('max-age=');
  });
});

describe('the client', () => {
  const app = createApp(buildContext(db), { clientDirectory });

  test('opens at every address of a screen, never under /api', async () => {
    const screen = await request(app).get('/units/QTKX40127?tab=reads').expect(200);
    expect(screen.text).toContain('<title>Fishplate');
    expect(screen.headers['cache-control']).toBe('no-cache');
    const { body } = await request(app).get('/api/units/QTKX40127').expect(404);
    expect(body).toMatchObject({ status: 404, instance: '/api/units/QTKX40127' });
  });

  test('keeps what carries its version in its name', async () => {
    const { headers } = await request(app).get('/assets/main-1.js').expect(200);
    expect(headers['cache-control']).toBe('public, max-age=31536000, immutable');
  });

  test('gives nothing from outside its directory', async () => {
    const { text } = await request(app).get('/..%2f..%2fpackage.json');
    expect(text).not.toContain('"dependencies"');
  });
});

describe('/metrics', () => {
  test('does not exist without a token', async () => {
    const app = createApp(buildContext(db), { clientDirectory });
    await request(app).get('/metrics').expect(404);
  });

  test('opens to the token alone', async () => {
    const env = { metricsToken: 'a token only for metrics' };
    const app = createApp(buildContext(db, { env }), {
      clientDirectory,
      projectorLagMs: () => Promise.resolve(1_500),
    });
    await request(app).get('/metrics').expect(401);
    await request(app).get('/metrics').set('Authorization', 'Bearer wrong').expect(401);
    await request(app).get('/api/health').expect(200);
    const { text } = await request(app)
      .get('/metrics')
      .set('Authorization', 'Bearer a token only for metrics')
      .expect(200);
    expect(text).toContain('fishplate_projector_lag_seconds 1.5');
    expect(text).toContain('fishplate_outbox_pending 0');
    expect(text).toMatch(/request_seconds_count{method="GET",route="\/health",status="200"} 1/);
  });
});

describe('health', () => {
  test('says how far the projector is', async () => {
    const app = createApp(buildContext(db), {
      clientDirectory: null,
      projectorLagMs: () => Promise.resolve(42),
    });
    const { body } = await request(app).get('/api/health').expect(200);
    expect(body).toEqual({ status: 'ok', database: 'ok', projectorLagMs: 42, outboxPending: 0 });
  });
});
