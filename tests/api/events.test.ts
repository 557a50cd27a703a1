import { createServer, get, type IncomingMessage, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import express, { type Express } from 'express';
import request from 'supertest';
import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest';
import { createApp } from '../../server/app.js';
import { aarIdentity } from '../../server/domain/identifiers/identity.js';
import { requestLog } from '../../server/middleware/request-log.js';
import { problemHandler } from '../../server/middleware/problem.js';
import type { Organisation } from '../../server/models/organisation.js';
import type { Site } from '../../server/models/site.js';
import type { Unit } from '../../server/models/unit.js';
import { eventsRoutes } from '../../server/routes/events.js';
import { sessionRoutes } from '../../server/routes/session.js';
import { jsonBody } from '../../server/middleware/json-body.js';
import { buildContext } from '../support/context.js';
import { countStatements } from '../support/count-statements.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildOrganisation,
  buildPerson,
  buildSite,
  buildUnit,
  PASSWORD,
} from '../support/factories.js';
import { placeUnit } from '../support/histories.js';

const db = useTestDatabase();
/** A busy machine may take its time. */
const PATIENT = { timeout: 20_000, interval: 20 };
const NOW = new Date('2026-03-10T12:00:00.000Z');

interface Told {
  name: string;
  data: unknown;
  id: string;
}

/** One open stream and all that came over it. */
class Listener {
  readonly told: Told[] = [];
  ended = false;
  private rest = '';

  constructor(private readonly answer: IncomingMessage) {
    answer.setEncoding('utf8');
    answer.on('data', (text: unknown) => this.take(String(text)));
    answer.on('close', () => (this.ended = true));
  }

  get status() {
    return this.answer.statusCode;
  }

  get headers() {
    return this.answer.headers;
  }

  named(name: string): Told[] {
    return this.told.filter((one) => one.name === name);
  }

  close(): void {
    this.answer.destroy();
  }

  private take(text: string): void {
    const blocks = (this.rest + text).split('\n\n');
    this.rest = blocks.pop() ?? '';
    for (const block of blocks) {
      const field = (key: string) =>
        block
          .split('\n')
          .find((line) => line.startsWith(`${key}:`))
          ?.slice(key.length + 1)
          .trim();
      const data = field('data');
      if (data === undefined) continue;
      this.told.push({ name: field('event') ?? '', data: JSON.parse(data), id: field('id') ?? '' });
    }
  }
}

const counted = countStatements(buildContext(db));
let server: Server;
let listeners: Listener[] = [];
let context: ReturnType<typeof buildContext>;
let [alder, cairn]: Site[] = [];
let [mine, theirs]: Organisation[] = [];
let [myCar, theirCar]: Unit[] = [];

/** Sign-in and events alone, with short times. */
function quickApp(): Express {
  const app = express();
  app.use(requestLog(context.logger));
  app.use(jsonBody(100_000));
  app.use('/api', sessionRoutes(context));
  app.use('/api', eventsRoutes(context, { coalesceMs: 20, checkMs: 50 }));
  app.use(problemHandler(context.logger));
  return app;
}

beforeEach(async () => {
  context = { ...counted.context, ...buildContext(db), db: counted.context.db };
  context.clock.set(NOW);
  server = createServer(quickApp());
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  [alder, cairn] = [await buildSite(db), await buildSite(db)];
  [mine, theirs] = [await buildOrganisation(db), await buildOrganisation(db)];
  myCar = await buildUnit(db, { identity: aarIdentity('QTKX', 1), owner: mine });
  theirCar = await buildUnit(db, { identity: aarIdentity('QTKX', 2), owner: theirs });
  await placeUnit(db, myCar, { state: 'onHand', at: NOW, site: cairn });
  await placeUnit(db, theirCar, { state: 'onHand', at: NOW, site: alder });
});

afterEach(async () => {
  for (const listener of listeners) listener.close();
  listeners = [];
  await new Promise((resolve) => server.close(resolve));
});

const portOf = (one: Server) => (one.address() as AddressInfo).port;

async function cookieOf(person: { email: string }): Promise<string> {
  const answer = await request(server)
    .post('/api/session')
    .send({ email: person.email, password: PASSWORD })
    .expect(200);
  return String(answer.headers['set-cookie']).split(';')[0] ?? '';
}

async function listen(cookie: string, headers: Record<string, string> = {}): Promise<Listener> {
  const answer = await new Promise<IncomingMessage>((resolve, reject) => {
    const options = { host: '127.0.0.1', port: portOf(server), path: '/api/events' };
    get({ ...options, headers: { Cookie: cookie, ...headers } }, resolve).on('error', reject);
  });
  const listener = new Listener(answer);
  listeners.push(listener);
  return listener;
}

async function listenAs(
  values: Parameters<typeof buildPerson>[1],
  headers: Record<string, string> = {},
): Promise<Listener> {
  return opened(await listen(await cookieOf(await buildPerson(db, values)), headers));
}

async function opened(listener: Listener): Promise<Listener> {
  await vi.waitFor(() => expect(listener.told.length).toBeGreaterThan(0), PATIENT);
  return listener;
}

const idsOf = (listener: Listener) =>
  listener.named('changed').flatMap((one) => (one.data as { unitIds: string[] }).unitIds);

/** Everybody has been told of all that was published, once this later change has come through. */
async function settle(...all: Listener[]): Promise<void> {
  const before = all.map((one) => one.named('alerts').length);
  context.liveEvents.publish({ alerts: true });
  await vi.waitFor(() => {
    for (const [index, one] of all.entries()) {
      expect(one.named('alerts').length).toBeGreaterThan(before[index] ?? 0);
    }
  }, PATIENT);
}

const publish = (...units: (Unit | undefined)[]) =>
  context.liveEvents.publish({ unitIds: units.map((unit) => unit?.id ?? 0) });

describe('live events', () => {
  test('tell each person of those units only that they may see', async () => {
    const owner = await listenAs({ roles: ['owner'], organisation: mine });
    const clerk = await listenAs({ roles: ['clerk'], sites: [alder as Site] });
    const administrator = await listenAs({ roles: ['administrator'] });
    const nobody = await listenAs({ roles: ['clerk'] });
    publish(myCar, theirCar);
    await settle(owner, clerk, administrator, nobody);
    expect(idsOf(owner)).toEqual(['QTKX1']);
    expect(idsOf(clerk)).toEqual(['QTKX2']);
    expect(idsOf(administrator).toSorted()).toEqual(['QTKX1', 'QTKX2']);
    expect(idsOf(nobody)).toEqual([]);
  });

  test('judge by what holds when they are sent, not when the stream was opened', async () => {
    const owner = await listenAs({ roles: ['owner'], organisation: mine });
    await db.pool.query('DELETE FROM visible_units WHERE unit_id = ?', [myCar?.id]);
    publish(myCar);
    await settle(owner);
    expect(idsOf(owner)).toEqual([]);
  });

  test('tell the people of a site once more when a car has left it', async () => {
    const clerk = await listenAs({ roles: ['clerk'], sites: [alder as Site] });
    publish(theirCar);
    await settle(clerk);
    await db.pool.query('UPDATE last_seen SET site_id = ? WHERE unit_id = ?', [
      cairn?.id,
      theirCar?.id,
    ]);
    publish(theirCar);
    await settle(clerk);
    expect(idsOf(clerk)).toEqual(['QTKX2', 'QTKX2']);
    publish(theirCar);
    await settle(clerk);
    expect(idsOf(clerk)).toHaveLength(2);
  });

  test('join what changes within a moment, for the price of one look', async () => {
    const owner = await listenAs({ roles: ['owner'], organisation: mine });
    const others = await Promise.all(
      [1, 2, 3, 4].map(() => listenAs({ roles: ['owner'], organisation: mine })),
    );
    await settle(owner, ...others);
    counted.statements.take();
    for (let count = 0; count < 50; count += 1) publish(myCar);
    await vi.waitFor(() => expect(owner.named('changed').length).toBeGreaterThan(0), PATIENT);
    await settle(owner, ...others);
    const looks = counted.statements.take().filter(({ text }) => text.includes('visible_units'));
    expect(looks).toHaveLength(1);
    expect(owner.named('changed')).toHaveLength(1);
    expect(others.map((one) => one.named('changed').length)).toEqual([1, 1, 1, 1]);
  });

  test('carry on where a client broke off', async () => {
    const cookie = await cookieOf(await buildPerson(db, { roles: ['owner'], organisation: mine }));
    const first = await opened(await listen(cookie));
    publish(myCar);
    await settle(first);
    const lastId = first.told.at(-1)?.id ?? '';
    first.close();
    publish(theirCar);
    publish(myCar);
    const second = await opened(await listen(cookie, { 'Last-Event-ID': lastId }));
    await vi.waitFor(() => expect(idsOf(second)).toEqual(['QTKX1']), PATIENT);
    expect(second.named('reset')).toEqual([]);
    const third = await opened(
      await listen(cookie, { 'Last-Event-ID': second.told.at(-1)?.id ?? '' }),
    );
    await settle(third);
    expect(third.told.map((one) => one.name)).toEqual(['ready', 'alerts']);
  });

  test.each(['7', 'deadbeef-3', 'x', '-', 'deadbeef-99999999999999999999'])(
    'say reset to a client that comes with an id of another life: %s',
    async (id) => {
      const owner = await listenAs(
        { roles: ['owner'], organisation: mine },
        { 'Last-Event-ID': id },
      );
      expect(owner.told.map((one) => one.name)).toEqual(['reset']);
    },
  );

  test('say reset when more was missed than is kept', async () => {
    const cookie = await cookieOf(await buildPerson(db));
    const first = await opened(await listen(cookie));
    const lastId = first.told[0]?.id ?? '';
    first.close();
    for (let count = 0; count < 2_001; count += 1) context.liveEvents.publish({ alerts: true });
    const second = await opened(await listen(cookie, { 'Last-Event-ID': lastId }));
    expect(second.told[0]?.name).toBe('reset');
  });

  test('say reset instead of naming more than a thousand units', async () => {
    await db.pool.query(
      `INSERT INTO units (unit_key, kind, registered) SELECT CONCAT('QBLX', seq), 'car', 0 FROM seq_1_to_1001`,
    );
    const ids = await db.pool.query<{ id: number }[]>(
      `SELECT id FROM units WHERE unit_key LIKE 'QBLX%'`,
    );
    const administrator = await listenAs({ roles: ['administrator'] });
    context.liveEvents.publish({ unitIds: ids.map((row) => row.id) });
    await vi.waitFor(() => expect(administrator.named('reset')).toHaveLength(1), PATIENT);
    expect(administrator.named('changed')).toEqual([]);
  });
});

describe('a stream', () => {
  test('is an event stream that nobody stores or compresses', async () => {
    const owner = await listenAs({ roles: ['owner'], organisation: mine });
    expect(owner.status).toBe(200);
    expect(owner.headers).toMatchObject({
      'content-type': 'text/event-stream',
      'cache-control': expect.stringContaining('no-store'),
    });
    expect(owner.headers['content-encoding']).toBeUndefined();
  });

  test('ends when its session ends, and nothing more is said on it', async () => {
    const cookie = await cookieOf(await buildPerson(db, { roles: ['owner'], organisation: mine }));
    const owner = await opened(await listen(cookie));
    await request(server).delete('/api/session').set('Cookie', cookie).expect(204);
    publish(myCar);
    await vi.waitFor(() => expect(owner.ended).toBe(true), PATIENT);
    expect(idsOf(owner)).toEqual([]);
  });

  test('ends when the session expires', async () => {
    const owner = await listenAs({ roles: ['owner'], organisation: mine });
    context.clock.advance(24 * 3_600_000);
    await vi.waitFor(() => expect(owner.ended).toBe(true), PATIENT);
  });

  test('ends when the rights of the person change, so that the next is narrowed anew', async () => {
    const person = await buildPerson(db, { roles: ['owner'], organisation: mine });
    const owner = await opened(await listen(await cookieOf(person)));
    await settle(owner);
    await person.update({ organisationId: theirs?.id ?? null });
    publish(theirCar);
    await vi.waitFor(() => expect(owner.ended).toBe(true), PATIENT);
    expect(idsOf(owner)).toEqual([]);
  });

  test('is refused to whoever is not signed in, or opens too many', async () => {
    await request(server).get('/api/events').expect(401);
    const cookie = await cookieOf(await buildPerson(db));
    for (let count = 0; count < 20; count += 1) await opened(await listen(cookie));
    await request(server).get('/api/events').set('Cookie', cookie).expect(429);
    listeners[0]?.close();
    await vi.waitFor(async () => {
      const another = await listen(cookie);
      expect(another.status).toBe(200);
    }, PATIENT);
  });

  test('goes through the whole server too', async () => {
    server.close();
    server = createServer(createApp(context));
    await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
    const owner = await listenAs({ roles: ['owner'], organisation: mine });
    publish(myCar, theirCar);
    await vi.waitFor(() => expect(idsOf(owner)).toEqual(['QTKX1']), PATIENT);
    expect(owner.headers['content-encoding']).toBeUndefined();
  });
});
