import request from 'supertest';
import { describe, expect, test } from 'vitest';
import { openDatabase } from '../../server/lib/database.js';
import { buildClock, buildContext } from '../support/context.js';
import { testDatabaseUrl, useTestDatabase } from '../support/database.js';
import { buildPerson, buildSite, signIn } from '../support/factories.js';
import { buildIngestApp, buildReader } from '../support/ingest.js';
import { buildReporter } from '../support/reports.js';

const db = useTestDatabase();
const clock = buildClock('2026-12-01T12:00:00Z');
const context = buildContext(db, { clock });
const app = buildIngestApp(context);

const beat = (token: string, body: object, door = app) =>
  request(door).post('/api/ingest/heartbeat').auth(token, { type: 'bearer' }).send(body);
const antenna = (number: number, powered = true, noise: unknown = -71) => ({
  number,
  powered,
  noise,
});
const sound = {
  readerTime: '2026-12-01T12:00:40Z',
  antennas: [antenna(1), antenna(2, false, null)],
};

async function heartbeatOf(code: string) {
  const admin = await signIn(app, await buildPerson(db));
  const { body } = await admin.get(`/api/sites/${code}`).expect(200);
  return body.data.heartbeat;
}

describe('a heartbeat', () => {
  test('is what administrators see of the reader, in the list and on the site', async () => {
    const { site, token } = await buildReader(db);
    const silent = await buildSite(db);
    await beat(token, { ...sound, site: site.code }).expect(204);
    const at = '2026-12-01T12:00:00.000Z';
    const told = {
      at,
      clockOffsetMs: 40_000,
      antennas: [
        { number: 1, powered: true, noise: -71, at },
        { number: 2, powered: false, noise: null, at },
      ],
    };
    expect(await heartbeatOf(site.code)).toEqual(told);
    const admin = await signIn(app, await buildPerson(db));
    const { body } = await admin.get('/api/sites').expect(200);
    expect(body.data).toMatchObject([
      { code: site.code, heartbeat: told },
      { code: silent.code, heartbeat: null },
    ]);
  });

  test.each(['owner', 'clerk', 'dispatcher'] as const)('is nothing to a(n) %s', async (role) => {
    const { site, token } = await buildReader(db);
    await beat(token, sound).expect(204);
    const person = await signIn(app, await buildPerson(db, { roles: [role], sites: [site] }));
    const { body } = await person.get('/api/sites').expect(200);
    expect(body.data).toHaveLength(1);
    expect(body.data[0]).not.toHaveProperty('heartbeat');
    const one = await person.get(`/api/sites/${site.code}`).expect(200);
    expect(one.body.data).not.toHaveProperty('heartbeat');
  });

  test('that comes later takes the place of the one before, whatever its own clock says', async () => {
    const { site, token } = await buildReader(db);
    await beat(token, sound).expect(204);
    await beat(token, sound).expect(204);
    clock.advance(60_000);
    const later = { readerTime: '1970-01-01T00:00:09Z', antennas: [antenna(1, false, -70.5)] };
    await beat(token, later).expect(204);
    const told = await heartbeatOf(site.code);
    expect(told.clockOffsetMs).toBe(Date.UTC(1970, 0, 1, 0, 0, 9) - clock.now().getTime());
    // Antenna 2 was left out: its last word is a minute older.
    expect(told.antennas).toMatchObject([
      { number: 1, powered: false, noise: -70.5, at: clock.now().toISOString() },
      { number: 2, powered: false, at: new Date(clock.now().getTime() - 60_000).toISOString() },
    ]);
  });

  test('of eight readers at once leaves one row of each', async () => {
    const { site, token } = await buildReader(db);
    const antennas = Array.from({ length: 255 }, (_, n) => antenna(n + 1));
    const answers = await Promise.all(
      Array.from({ length: 8 }, (_, n) =>
        beat(token, { ...sound, antennas: n % 2 ? antennas : antennas.toReversed() }),
      ),
    );
    expect(answers.map(({ status }) => status)).toEqual(Array(8).fill(204));
    expect((await heartbeatOf(site.code)).antennas).toHaveLength(255);
  });

  test.each([
    ['no time', { antennas: [] }, '/readerTime'],
    ['a time without offset', { ...sound, readerTime: '2026-12-01T12:00:00' }, '/readerTime'],
    ['a time after 2100', { ...sound, readerTime: '2101-01-01T00:00:00Z' }, '/readerTime'],
    ['no antennas', { readerTime: sound.readerTime }, '/antennas'],
    ['an antenna 0', { ...sound, antennas: [antenna(0)] }, '/antennas/0/number'],
    ['an antenna 256', { ...sound, antennas: [antenna(256)] }, '/antennas/0/number'],
    ['an antenna twice', { ...sound, antennas: [antenna(1), antenna(1)] }, '/antennas/1/number'],
    ['noise as text', { ...sound, antennas: [antenna(1, true, 'loud')] }, '/antennas/0/noise'],
    [
      'power as a number',
      { ...sound, antennas: [{ ...antenna(1), powered: 1 }] },
      '/antennas/0/powered',
    ],
    ['a site that is none', { ...sound, site: 'a site' }, '/site'],
  ])('is refused with %s, and nothing is kept', async (_what, body, pointer) => {
    const { site, token } = await buildReader(db);
    const answer = await beat(token, body).expect(400);
    expect(answer.body.errors).toEqual([expect.objectContaining({ pointer })]);
    expect(await heartbeatOf(site.code)).toBeNull();
    await beat(token, sound).expect(204);
  });

  test('is refused when it is empty, no UTF-8, too large or of another type', async () => {
    const { token } = await buildReader(db);
    const post = () => request(app).post('/api/ingest/heartbeat').auth(token, { type: 'bearer' });
    const raw = (type: string, sent: string | Buffer) =>
      post()
        .set('Content-Type', type)
        .serialize((text: string) => text)
        .send(sent);
    await post().expect(400);
    await raw('application/json', Buffer.from([0x22, 0xff, 0x22])).expect(400);
    await raw('application/json', '{"antennas": [').expect(400);
    await raw('application/json', `"${'x'.repeat(100_000)}"`).expect(413);
    await raw('text/plain', JSON.stringify(sound)).expect(415);
    await raw('application/json', JSON.stringify(sound)).expect(204);
  });

  test("comes by the token of the site's reader alone", async () => {
    const [mine, other] = [await buildReader(db), await buildReader(db)];
    await beat(mine.token, { ...sound, site: other.site.code }).expect(403);
    await request(app).post('/api/ingest/heartbeat').send(sound).expect(401);
    await beat((await buildReporter(context)).token, sound).expect(401);
    expect(await heartbeatOf(other.site.code)).toBeNull();
  });

  test('goes with its site', async () => {
    const { site, token } = await buildReader(db);
    await beat(token, sound).expect(204);
    await db.pool.query('DELETE FROM antennas');
    await db.pool.query('DELETE FROM read_points');
    await db.pool.query('DELETE FROM reader_tokens');
    const admin = await signIn(app, await buildPerson(db));
    await admin.delete(`/api/sites/${site.code}`).expect(204);
  });

  test('gets 429 when it comes too often, and 503 while the database is away', async () => {
    const { token } = await buildReader(db);
    const limited = buildIngestApp(context, { requestsPerSecond: 1 });
    await beat(token, sound, limited).expect(204);
    await beat(token, sound, limited).expect(429);
    const closing = openDatabase(testDatabaseUrl(), { connections: 1 });
    const orphan = buildIngestApp({ ...context, db: closing });
    await beat(token, sound, orphan).expect(204);
    await closing.close();
    const { headers } = await beat(token, sound, orphan).expect(503);
    expect(headers['retry-after']).toBeDefined();
  });
});
