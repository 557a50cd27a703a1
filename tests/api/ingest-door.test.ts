import request from 'supertest';
import { describe, expect, test } from 'vitest';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildIngestApp, buildReader, carTag, postReads } from '../support/ingest.js';

const db = useTestDatabase();
const context = buildContext(db);
const app = buildIngestApp(context);
const read = () => ({ antenna: 1, tag: carTag(1), readAt: context.clock.now().toISOString() });

const post = (token: string, type: string, body: string) =>
  request(app)
    .post('/api/ingest/reads')
    .auth(token, { type: 'bearer' })
    .set('Content-Type', type)
    .serialize((sent: string) => sent)
    .send(body);

describe('who may send', () => {
  test('nobody without a valid reader token', async () => {
    const { token } = await buildReader(db);
    const answer = await request(app).post('/api/ingest/reads').send({ reads: [] }).expect(401);
    expect(answer.type).toBe('application/problem+json');
    expect(answer.headers['www-authenticate']).toBe('Bearer');
    await postReads(app, `${token}x`, { reads: [] }).expect(401);
    await db.pool.query('UPDATE reader_tokens SET revoked_at = NOW(3)');
    await postReads(app, token, { reads: [] }).expect(401);
  });

  test('a token speaks for its own site alone', async () => {
    const [mine, other] = [await buildReader(db), await buildReader(db)];
    await postReads(app, mine.token, { site: other.site.code, reads: [read()] }).expect(403);
    await postReads(app, mine.token, { site: 'NOWHERE', reads: [read()] }).expect(403);
    await postReads(app, mine.token, { site: mine.site.code, reads: [read()] }).expect(200);
  });
});

describe('a body that is refused whole', () => {
  test.each([
    ['no list of reads', '{"reads": {}}', '/reads'],
    ['no reads at all', '{"site": "ALDER"}', '/reads'],
    ['a site that is no text', '{"site": 5, "reads": []}', '/site'],
  ])('400 with a pointer for %s', async (_what, body, pointer) => {
    const { token } = await buildReader(db);
    const answer = await post(token, 'application/json', body).expect(400);
    expect(answer.type).toBe('application/problem+json');
    expect(answer.body).toMatchObject({ errors: [{ pointer }] });
  });

  test.each(['text/plain', 'application/json; charset=iso-8859-1', 'application/jsonp'])(
    '415 for %s',
    async (type) => {
      const { token } = await buildReader(db);
      await post(token, type, '{"reads": []}').expect(415);
    },
  );

  test('400 for a query parameter', async () => {
    const { token } = await buildReader(db);
    const { body } = await request(app)
      .post('/api/ingest/reads?site=A')
      .auth(token, { type: 'bearer' })
      .send({ reads: [] })
      .expect(400);
    expect(body).toMatchObject({ errors: [{ pointer: '?site' }] });
  });
});

describe('a token that sends too fast', () => {
  test('gets 429 with Retry-After for requests; others go on', async () => {
    const [fast, other] = [await buildReader(db), await buildReader(db)];
    const limited = buildIngestApp(context, { requestsPerSecond: 2 });
    await postReads(limited, fast.token, { reads: [] }).expect(200);
    await postReads(limited, fast.token, { reads: [] }).expect(200);
    const answer = await postReads(limited, fast.token, { reads: [] }).expect(429);
    expect(Number(answer.headers['retry-after'])).toBeGreaterThanOrEqual(1);
    await postReads(limited, other.token, { reads: [] }).expect(200);
  });

  test('gets 429 for reads, and none of them is stored', async () => {
    const { token } = await buildReader(db);
    const limited = buildIngestApp(context, { readsPerSecond: 2 });
    const reads = [1, 2, 3].map((number) => ({ ...read(), tag: carTag(number) }));
    await postReads(limited, token, { reads }).expect(429);
    const [row] = await db.pool.query<{ n: number }[]>('SELECT COUNT(*) AS n FROM `reads`');
    expect(row?.n).toBe(0);
  });
});
