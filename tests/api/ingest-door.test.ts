import net from 'node:net';
import type { AddressInfo } from 'node:net';
import { once } from 'node:events';
import request from 'supertest';
import { describe, expect, test } from 'vitest';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildIngestApp, buildReader, carTag, postReads } from '../support/ingest.js';

const db = useTestDatabase();
const context = buildContext(db);
const app = buildIngestApp(context);
const read = () => ({ antenna: 1, tag: carTag(1), readAt: context.clock.now().toISOString() });

const post = (token: string, type: string, body: string | Buffer) =>
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
    ['no JSON', '{"reads": [', ''],
    ['no object', '[]', ''],
    ['no list of reads', '{"reads": {}}', '/reads'],
    ['no reads at all', '{"site": "ALDER"}', '/reads'],
    ['a site that is no text', '{"site": 5, "reads": []}', '/site'],
    ['nesting over 32 deep', `{"reads": [${'['.repeat(31)}${']'.repeat(31)}]}`, undefined],
  ])('400 for %s', async (_what, body, pointer) => {
    const { token } = await buildReader(db);
    const answer = await post(token, 'application/json', body).expect(400);
    expect(answer.type).toBe('application/problem+json');
    if (pointer) expect(answer.body).toMatchObject({ errors: [{ pointer }] });
  });

  test('nesting of 32 is taken, and brackets within text are none', async () => {
    const { token } = await buildReader(db);
    const body = `{"reads": [${'['.repeat(30)}"${'['.repeat(99)}\\"]["${']'.repeat(30)}]}`;
    await post(token, 'application/json', body).expect(200);
  });

  test('400 for bytes that are no UTF-8', async () => {
    const { token } = await buildReader(db);
    const body = Buffer.from([...Buffer.from('{"reads": ["'), 0xc3, ...Buffer.from('"]}')]);
    const { body: problem } = await post(token, 'application/json', body).expect(400);
    expect(problem).toMatchObject({ detail: 'The body is not UTF-8.' });
  });

  test('413 over 5,000 reads; 5,000 are taken', async () => {
    const { token } = await buildReader(db);
    const many = (length: number) => ({ reads: Array.from({ length }, () => 0) });
    await postReads(app, token, many(5_001)).expect(413);
    const { body } = await postReads(app, token, many(5_000)).expect(200);
    expect(body).toMatchObject({ rejected: 5_000 });
    await post(token, 'application/x-ndjson', '0\n'.repeat(5_001)).expect(413);
  });

  test('413 over 2 MB, told beforehand or not', async () => {
    const { token } = await buildReader(db);
    const large = `{"reads": [], "filler": "${'x'.repeat(2 * 1024 * 1024)}"}`;
    await post(token, 'application/json', large).expect(413);
    const chunked = request(app)
      .post('/api/ingest/reads')
      .auth(token, { type: 'bearer' })
      .set('Content-Type', 'application/json')
      .set('Transfer-Encoding', 'chunked');
    chunked.write(large.slice(0, 1_000_000));
    chunked.write(large.slice(1_000_000));
    await chunked.expect(413);
  });

  test.each(['text/plain', 'application/json; charset=iso-8859-1', 'application/jsonp'])(
    '415 for %s',
    async (type) => {
      const { token } = await buildReader(db);
      await post(token, type, '{"reads": []}').expect(415);
    },
  );

  test('415 for a compressed body, 400 for a query parameter', async () => {
    const { token } = await buildReader(db);
    await post(token, 'application/json', '{}').set('Content-Encoding', 'gzip').expect(415);
    const { body } = await request(app)
      .post('/api/ingest/reads?site=A')
      .auth(token, { type: 'bearer' })
      .send({ reads: [] })
      .expect(400);
    expect(body).toMatchObject({ errors: [{ pointer: '?site' }] });
  });

  test('408 when the body stops coming', async () => {
    const { token } = await buildReader(db);
    const server = buildIngestApp(context, { idleMs: 100 }).listen(0, '127.0.0.1');
    await once(server, 'listening');
    const socket = net.connect((server.address() as AddressInfo).port, '127.0.0.1');
    socket.write(
      'POST /api/ingest/reads HTTP/1.1\r\nHost: reader\r\nContent-Type: application/json\r\n' +
        `Authorization: Bearer ${token}\r\nContent-Length: 500\r\n\r\n{"reads": [`,
    );
    const [head] = (await once(socket, 'data')) as [Buffer];
    expect(head.toString()).toMatch(/^HTTP\/1\.1 408 /);
    socket.destroy();
    server.close();
    await once(server, 'close');
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
