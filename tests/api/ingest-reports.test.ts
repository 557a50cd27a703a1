import { createHash } from 'node:crypto';
import request from 'supertest';
import { beforeEach, describe, expect, test } from 'vitest';
import type { Site } from '../../server/models/site.js';
import { replaceReportToken } from '../../server/services/replace-report-token.js';
import { buildClock, buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildOrganisation, buildPerson, buildSite, signIn } from '../support/factories.js';
import { buildIngestApp, buildReader } from '../support/ingest.js';
import { buildReporter, postReports, queuedReports, storedReports } from '../support/reports.js';

const db = useTestDatabase();
const context = buildContext(db, { clock: buildClock('2026-12-01T12:00:00Z') });
const app = buildIngestApp(context);
let site: Site;
beforeEach(async () => {
  site = await buildSite(db, { code: 'ALDER' });
});

const AT = '2026-12-01T11:00:00.000Z';
const report = (more: object = {}) => ({
  reference: 'r1',
  unit: 'QTKX 40127',
  event: 'arrived',
  at: AT,
  site: 'ALDER',
  ...more,
});
const body = (...reports: unknown[]) => ({ source: 'car-desk', reports });
const none = { accepted: 0, duplicates: 0, rejected: 0, problems: [] };

const post = (token: string, type: string, sent: string | Buffer) =>
  request(app)
    .post('/api/ingest/reports')
    .auth(token, { type: 'bearer' })
    .set('Content-Type', type)
    .serialize((text: string) => text)
    .send(sent);

describe('a movement report', () => {
  test('is stored as it came and queued for its car, by when the answer is out', async () => {
    const { token, organisation } = await buildReporter(context);
    const answer = await postReports(app, token, body(report({ at: '2026-12-01T05:00:00-06:00' })));
    expect([answer.status, answer.body]).toEqual([200, { ...none, accepted: 1 }]);
    expect(await storedReports(db)).toMatchObject([
      {
        organisation_id: organisation.id,
        source: 'car-desk',
        reference: 'r1',
        unit_compact: 'QTKX40127',
        event: 'arrived',
        at: new Date(AT),
        site_id: site.id,
      },
    ]);
    expect(await queuedReports(db)).toEqual([[['QTKX40127', AT]]]);
  });

  test.each([
    ['qtkx 040127', 'QTKX40127'],
    ['ZQXU 305438', 'ZQXU3054381'],
    ['21 81 2471 217-3', '218124712173'],
  ])('takes %s as people write it', async (unit, compact) => {
    const { token } = await buildReporter(context);
    await postReports(app, token, body(report({ unit }))).expect(200);
    expect(await storedReports(db)).toMatchObject([{ unit_compact: compact }]);
  });

  test('that comes again is a duplicate and queues nothing, whatever is new beside it', async () => {
    const { token } = await buildReporter(context);
    await postReports(app, token, body(report())).expect(200);
    const again = await postReports(app, token, body(report(), report({ reference: ' r1 ' })));
    expect(again.body).toEqual({ ...none, duplicates: 2 });
    const mixed = await postReports(app, token, body(report({ reference: 'r2' }), report()));
    expect(mixed.body).toEqual({ ...none, accepted: 1, duplicates: 1 });
    expect(await queuedReports(db)).toHaveLength(2);
    expect(await storedReports(db)).toHaveLength(2);
  });

  test('under a reference that stands for another one is told so; the first stays', async () => {
    const { token } = await buildReporter(context);
    const departed = report({ event: 'departed' });
    const both = await postReports(app, token, body(report(), departed, report()));
    expect(both.body).toEqual({
      accepted: 1,
      duplicates: 2,
      rejected: 0,
      problems: [expect.objectContaining({ index: 1, code: 'duplicate' })],
    });
    const later = await postReports(app, token, body(departed));
    expect(later.body.problems).toMatchObject([{ index: 0, code: 'duplicate' }]);
    expect(later.body).toMatchObject({ duplicates: 1, rejected: 0 });
    expect(await storedReports(db)).toMatchObject([{ event: 'arrived' }]);
  });

  test('is another one from another source, and from another organisation', async () => {
    const [one, two] = [await buildReporter(context), await buildReporter(context)];
    const other = { source: 'yard-desk', reports: [report()] };
    for (const [token, sent] of [
      [one.token, body(report())],
      [one.token, other],
      [two.token, body(report())],
    ] as const) {
      expect((await postReports(app, token, sent)).body).toEqual({ ...none, accepted: 1 });
    }
    expect(await storedReports(db)).toHaveLength(3);
  });

  test('keeps capitals and small letters of references apart', async () => {
    const { token } = await buildReporter(context);
    const { body: answer } = await postReports(
      app,
      token,
      body(report({ reference: 'a' }), report({ reference: 'A' }), report({ reference: 'ä' })),
    );
    expect(answer).toEqual({ ...none, accepted: 3 });
  });

  test('that is late comes in its place: each car is queued once, from its earliest', async () => {
    const { token } = await buildReporter(context);
    const at = (hour: number) => `2026-11-30T${hour}:00:00.000Z`;
    await postReports(
      app,
      token,
      body(
        report({ reference: 'c', at: at(20), event: 'departed' }),
        report({ reference: 'a', at: at(10) }),
        report({ reference: 'b', at: at(15), unit: 'QTKX 1' }),
      ),
    ).expect(200);
    expect(await queuedReports(db)).toEqual([
      [
        ['QTKX40127', at(10)],
        ['QTKX1', at(15)],
      ],
    ]);
  });
});

describe('of many reports', () => {
  test('5,000 go in one request, queued in rows that hold them', async () => {
    const { token } = await buildReporter(context);
    const reports = Array.from({ length: 5_000 }, (_, n) => {
      return report({ reference: `r${n}`, unit: `QTKX ${n}` });
    });
    const { body: answer } = await postReports(app, token, body(...reports)).expect(200);
    expect(answer).toEqual({ ...none, accepted: 5_000 });
    const rows = await queuedReports(db);
    expect(rows.map((units) => units.length)).toEqual(Array(10).fill(500));
    expect(new Set(rows.flat().map(([unit]) => unit)).size).toBe(5_000);
  });

  test('eight clients with the same ones shuffled store each once', async () => {
    const { token } = await buildReporter(context);
    const all = Array.from({ length: 300 }, (_, n) => {
      return report({ reference: `r${n}`, unit: `QTKX ${n % 50}` });
    });
    const answers = await Promise.all(
      Array.from({ length: 8 }, (_, client) =>
        postReports(app, token, body(...all.map((_one, i) => all[(i * 7 + client * 37) % 300]))),
      ),
    );
    expect(answers.map((answer) => answer.status)).toEqual(Array(8).fill(200));
    const sum = (key: string) => answers.reduce((n, { body: told }) => n + told[key], 0);
    expect([sum('accepted'), sum('duplicates'), sum('rejected')]).toEqual([300, 2_100, 0]);
    expect(await storedReports(db)).toHaveLength(300);
    const queued = (await queuedReports(db)).flat().map(([unit]) => unit);
    expect(new Set(queued).size).toBe(50);
  });
});

describe('a faulty report is turned away by itself', () => {
  test.each<[string, string, unknown]>([
    ['no object', 'not-an-object', 7],
    ['a list', 'not-an-object', [report()]],
    ['nothing', 'not-an-object', null],
    ['no reference', 'missing-reference', report({ reference: '  ' })],
    ['no unit', 'missing-unit', report({ unit: undefined })],
    ['no event', 'missing-event', report({ event: null })],
    ['no time', 'missing-time', report({ at: '' })],
    ['no site', 'missing-site', report({ site: undefined })],
    ['a reference that is a number', 'bad-value', report({ reference: 5 })],
    ['a reference of 65 characters', 'bad-value', report({ reference: 'x'.repeat(65) })],
    ['a control character', 'bad-value', report({ reference: 'a\u0000b' })],
    ['half a character', 'bad-value', report({ reference: 'a\ud800' })],
    ['a unit that is a list', 'bad-value', report({ unit: ['QTKX 1'] })],
    ['a unit that is none', 'not-a-unit', report({ unit: 'nothing at all' })],
    ['a unit as long as a book', 'not-a-unit', report({ unit: 'Q'.repeat(100_000) })],
    ['a wrong check digit', 'not-a-unit', report({ unit: 'ZQXU 305438 7' })],
    ['a number alone', 'not-a-unit', report({ unit: '40127' })],
    ['an event of its own', 'unknown-event', report({ event: 'vanished' })],
    ['a time without offset', 'invalid-time', report({ at: '2026-12-01T11:00:00' })],
    ['a day that is none', 'invalid-time', report({ at: '2026-02-30T11:00:00Z' })],
    ['a time before 1990', 'invalid-time', report({ at: '1989-12-31T23:59:59Z' })],
    ['a time over five minutes ahead', 'clock-ahead', report({ at: '2026-12-01T12:05:00.001Z' })],
    ['a time before the kept months', 'too-old', report({ at: '2025-10-31T23:59:59Z' })],
    ['a site nobody knows', 'unknown-site', report({ site: 'NOWHERE' })],
    ['a site in small letters', 'unknown-site', report({ site: 'alder' })],
    ['a site in another script', 'unknown-site', report({ site: 'ÅLDER' })],
  ])('%s: %s', async (_what, code, faulty) => {
    const { token } = await buildReporter(context);
    const sound = report({ reference: 'sound', unit: 'QTKX 2' });
    const { status, body: answer } = await postReports(app, token, body(faulty, sound));
    expect(status).toBe(200);
    expect(answer).toEqual({
      ...{ accepted: 1, duplicates: 0, rejected: 1 },
      problems: [{ index: 0, code, detail: expect.stringMatching(/\.$/) }],
    });
    expect(await storedReports(db)).toMatchObject([{ reference: 'sound' }]);
  });

  test('the bounds of time belong to what is taken', async () => {
    const { token } = await buildReporter(context);
    const { body: answer } = await postReports(
      app,
      token,
      body(
        report({ reference: 'a', at: '2026-12-01T12:05:00Z' }),
        report({ reference: 'b', at: '2025-11-01T00:00:00Z' }),
      ),
    );
    expect(answer).toEqual({ ...none, accepted: 2 });
  });

  test('nothing but faults leaves nothing behind', async () => {
    const { token } = await buildReporter(context);
    const sent = body(null, report({ site: 'NOWHERE' }));
    const { body: answer } = await postReports(app, token, sent);
    expect(answer).toMatchObject({
      accepted: 0,
      rejected: 2,
      problems: [{ index: 0 }, { index: 1 }],
    });
    expect(await queuedReports(db)).toEqual([]);
    expect((await postReports(app, token, body())).body).toEqual(none);
  });
});

describe('a body that is refused whole', () => {
  test.each([
    ['nothing', '', undefined],
    ['no JSON', '{"reports": [', undefined],
    ['a list', '[]', ''],
    ['no source', '{"reports": []}', '/source'],
    ['a source of blanks', '{"source": "  ", "reports": []}', '/source'],
    ['a long source', `{"source": "${'x'.repeat(65)}", "reports": []}`, '/source'],
    ['no reports', '{"source": "a"}', '/reports'],
    ['reports that are no list', '{"source": "a", "reports": {}}', '/reports'],
    ['nesting over 32 deep', `{"reports": [${'['.repeat(31)}${']'.repeat(31)}]}`, undefined],
  ])('400 for %s', async (_what, sent, pointer) => {
    const { token } = await buildReporter(context);
    const answer = await post(token, 'application/json', sent).expect(400);
    expect(answer.type).toBe('application/problem+json');
    if (pointer !== undefined) expect(answer.body).toMatchObject({ errors: [{ pointer }] });
    await postReports(app, token, body(report())).expect(200);
  });

  test('400 for bytes that are no UTF-8', async () => {
    const { token } = await buildReporter(context);
    const bytes = Buffer.from([...Buffer.from('{"source": "'), 0xc3, ...Buffer.from('"}')]);
    const { body: problem } = await post(token, 'application/json', bytes).expect(400);
    expect(problem.detail).toBe('The body is not UTF-8.');
  });

  test('400 for a query parameter; 413 over 5,000 reports or 2 MB; 415 for another type', async () => {
    const { token } = await buildReporter(context);
    const query = request(app).post('/api/ingest/reports?source=a').auth(token, { type: 'bearer' });
    await query.send(body()).expect(400);
    await postReports(app, token, body(...Array(5_001).fill(0))).expect(413);
    await postReports(app, token, { ...body(), filler: 'x'.repeat(2 * 1024 * 1024) }).expect(413);
    await post(token, 'text/plain', JSON.stringify(body())).expect(415);
    await post(token, 'application/json; charset=utf-16', JSON.stringify(body())).expect(415);
  });

  test('429 for a token that sends too fast, with Retry-After; others go on', async () => {
    const [fast, other] = [await buildReporter(context), await buildReporter(context)];
    const limited = buildIngestApp(context, { requestsPerSecond: 1 });
    await postReports(limited, fast.token, body()).expect(200);
    const answer = await postReports(limited, fast.token, body(report())).expect(429);
    expect(Number(answer.headers['retry-after'])).toBeGreaterThanOrEqual(1);
    await postReports(limited, other.token, body()).expect(200);
    expect(await storedReports(db)).toEqual([]);
  });

  test('429 for reports beyond those of a second, and for bytes beyond those under way', async () => {
    const { token } = await buildReporter(context);
    const few = buildIngestApp(context, { readsPerSecond: 1 });
    const answer = await postReports(few, token, body(report(), report())).expect(429);
    expect(answer.body.detail).toContain('1 reports a second');
    const narrow = buildIngestApp(context, { bytesUnderWay: 100 });
    await postReports(narrow, token, body(report())).expect(429);
    await postReports(narrow, token, { source: 'a', reports: [] }).expect(200);
    expect(await storedReports(db)).toEqual([]);
  });

  test('401 for a token that ends while the body is on its way', async () => {
    const { token, organisation } = await buildReporter(context);
    const sent = JSON.stringify(body(report()));
    const slow = request(app)
      .post('/api/ingest/reports')
      .auth(token, { type: 'bearer' })
      .set('Content-Type', 'application/json')
      .set('Transfer-Encoding', 'chunked');
    slow.write(sent.slice(0, 20));
    await replaceReportToken(context, organisation.id);
    slow.write(sent.slice(20));
    await slow.expect(401);
    expect(await storedReports(db)).toEqual([]);
  });
});

describe('the token of an organisation', () => {
  test('is made by an administrator, told once, and ends the one before', async () => {
    await buildOrganisation(db, { code: 'QLINE' });
    const admin = await signIn(app, await buildPerson(db));
    const make = () => admin.post('/api/organisations/QLINE/report-token').expect(201);
    const { token: first } = (await make()).body.data as { token: string };
    expect(Buffer.from(first, 'base64url')).toHaveLength(32);
    await postReports(app, first, body(report())).expect(200);
    const { token: second } = (await make()).body.data as { token: string };
    await postReports(app, first, body(report())).expect(401);
    await postReports(app, second, body(report())).expect(200);
    const valid = await db.pool.query<{ token_hash: Buffer }[]>(
      'SELECT token_hash FROM report_tokens WHERE revoked_at IS NULL',
    );
    expect(valid).toEqual([{ token_hash: createHash('sha256').update(second).digest() }]);
    await admin.post('/api/organisations/NOBODY/report-token').expect(404);
  });

  test.each(['owner', 'clerk', 'dispatcher'] as const)(
    'is not for a(n) %s to make',
    async (role) => {
      await buildOrganisation(db, { code: 'QLINE' });
      const person = await signIn(app, await buildPerson(db, { roles: [role] }));
      await person.post('/api/organisations/QLINE/report-token').expect(403);
      await request(app).post('/api/organisations/QLINE/report-token').expect(401);
    },
  );

  test('is the only key to this door, and opens no other', async () => {
    const { token } = await buildReporter(context);
    const reader = await buildReader(db, { site });
    const answer = await postReports(app, reader.token, body(report())).expect(401);
    expect(answer.headers['www-authenticate']).toBe('Bearer');
    await request(app).post('/api/ingest/reports').send(body(report())).expect(401);
    const reads = request(app).post('/api/ingest/reads').auth(token, { type: 'bearer' });
    await reads.send({ reads: [] }).expect(401);
  });

  test('keeps an organisation that has reported, and its site, from being removed', async () => {
    const { token, organisation } = await buildReporter(context);
    const admin = await signIn(app, await buildPerson(db));
    await postReports(app, token, body(report())).expect(200);
    const refused = await admin.delete(`/api/organisations/${organisation.code}`).expect(409);
    expect(refused.body.detail).toContain('movement reports');
    await admin.delete('/api/sites/ALDER').expect(409);
    const { organisation: silent, token: unused } = await buildReporter(context);
    await admin.delete(`/api/organisations/${silent.code}`).expect(204);
    await postReports(app, unused, body(report())).expect(401);
  });
});
