import request from 'supertest';
import { describe, expect, test } from 'vitest';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildIngestApp, buildReader } from '../support/ingest.js';

const db = useTestDatabase();
const app = buildIngestApp(buildContext(db));

const post = (token: string, body: object) =>
  request(app).post('/api/ingest/wheels').auth(token, { type: 'bearer' }).send(body);

async function buildRecord() {
  const { site, readPoint, token } = await buildReader(db);
  const record = {
    site: site.code,
    readPoint: readPoint.code,
    startedAt: '2026-12-01T10:00:00.125Z',
    endedAt: '2026-12-01T10:02:00Z',
    axles: 248,
    direction: 'increasing',
    speedKmh: 24.5,
  };
  return { site, readPoint, token, record };
}

const stored = () => db.pool.query<object[]>('SELECT * FROM wheel_records');

describe('a train counted by wheel sensors', () => {
  test('is stored once, with one row of work; again it is a duplicate', async () => {
    const { readPoint, token, record } = await buildRecord();
    const { body } = await post(token, record).expect(200);
    expect(body).toEqual({ accepted: 1, duplicates: 0, held: 0, rejected: 0, problems: [] });
    const again = await post(token, { ...record, axles: 4 }).expect(200);
    expect(again.body).toMatchObject({ accepted: 0, duplicates: 1 });
    expect(await stored()).toMatchObject([
      {
        read_point_id: readPoint.id,
        started_at: new Date(record.startedAt),
        ended_at: new Date(record.endedAt),
        axles: 248,
        direction: 'increasing',
        speed_kmh: 24.5,
      },
    ]);
    const work = await db.pool.query<{ kind: string; payload: string }[]>('SELECT * FROM work');
    expect(work.map((row) => [row.kind, JSON.parse(row.payload)])).toEqual([
      [
        'wheels',
        {
          readPointId: readPoint.id,
          startedAt: '2026-12-01T10:00:00.125Z',
          endedAt: '2026-12-01T10:02:00.000Z',
        },
      ],
    ]);
  });

  test('may come without direction and speed', async () => {
    const { token, record } = await buildRecord();
    await post(token, { ...record, direction: 'unknown', speedKmh: undefined }).expect(200);
    expect(await stored()).toMatchObject([{ direction: null, speed_kmh: null }]);
  });

  test.each([
    ['2026-06-30T23:59:60Z', '2026-07-01T00:00:00.000Z'],
    ['2026-12-01t10:01:00.123456789z', '2026-12-01T10:01:00.123Z'],
    ['2026-12-01T15:45:00+05:45', '2026-12-01T10:00:00.000Z'],
  ])('has its times read like those of reads: %s', async (endedAt, instant) => {
    const { token, record } = await buildRecord();
    await post(token, { ...record, startedAt: '2026-06-01T00:00:00Z', endedAt }).expect(200);
    expect(await stored()).toMatchObject([{ ended_at: new Date(instant) }]);
  });

  test('is refused with every fault named', async () => {
    const { token, record } = await buildRecord();
    const { body } = await post(token, {
      ...record,
      startedAt: '2026-12-01T10:00:00',
      axles: 0,
      direction: 'north',
      speedKmh: -1,
    }).expect(400);
    const pointers = (body.errors as { pointer: string }[]).map((fault) => fault.pointer);
    expect(pointers.toSorted()).toEqual(['/axles', '/direction', '/speedKmh', '/startedAt']);
    const backwards = await post(token, { ...record, endedAt: '2026-12-01T09:00:00Z' }).expect(400);
    expect(backwards.body).toMatchObject({ errors: [{ pointer: '/endedAt' }] });
    const elsewhere = await post(token, { ...record, readPoint: 'NONE' }).expect(400);
    expect(elsewhere.body).toMatchObject({ errors: [{ pointer: '/readPoint' }] });
    expect(await stored()).toEqual([]);
  });

  test('needs a reader token of its site, and JSON', async () => {
    const { token, record } = await buildRecord();
    const other = await buildReader(db);
    await request(app).post('/api/ingest/wheels').send(record).expect(401);
    await post(other.token, record).expect(403);
    await post(other.token, { ...record, site: other.site.code }).expect(400);
    const door = () => request(app).post('/api/ingest/wheels').auth(token, { type: 'bearer' });
    await door().type('text/plain').send('248 axles').expect(415);
    await request(app)
      .post('/api/ingest/wheels?dry=1')
      .auth(token, { type: 'bearer' })
      .send(record)
      .expect(400);
  });
});
