import { randomUUID } from 'node:crypto';
import type { Express } from 'express';
import request from 'supertest';
import { beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import type { Role } from '../../server/contract/common.js';
import type { Site } from '../../server/models/site.js';
import { buildClock, buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildPerson, buildSite, signIn } from '../support/factories.js';
import { queuedReports } from '../support/reports.js';

const db = useTestDatabase();
const clock = buildClock('2026-12-01T12:00:00Z');
const app: Express = createApp(buildContext(db, { clock }), { clientDirectory: null });
let site: Site;
let clerk: Awaited<ReturnType<typeof signIn>>;
beforeEach(async () => {
  site = await buildSite(db, { code: 'ALDER' });
  clerk = await as('clerk', 'Ada Quill');
});

const as = async (role: Role, name = 'Somebody Else', sites = [site]) =>
  signIn(app, await buildPerson(db, { roles: [role], sites, name }));

const AT = '2026-12-01T11:58:00.000Z';
const report = (more: object = {}) => ({
  id: randomUUID(),
  unit: 'QTKX 40127',
  at: AT,
  seen: true,
  ...more,
});
const body = (...reports: unknown[]) => ({ track: '7', reports });
const none = { accepted: 0, duplicates: 0, rejected: 0, problems: [] };
const PATH = '/api/sites/ALDER/hand-reports';
const BACK = `${PATH}/retractions`;

describe('a report by eye', () => {
  test('stands in the list of its site and is queued for its car', async () => {
    const seen = report({ id: randomUUID().toUpperCase(), position: 3 });
    const answer = await clerk.post(PATH).send(body(seen)).expect(200);
    expect(answer.body).toEqual({ ...none, accepted: 1 });
    const { body: list } = await clerk.get(PATH).expect(200);
    expect(list).toEqual({
      data: [
        {
          id: seen.id.toLowerCase(),
          unitId: 'QTKX40127',
          display: 'QTKX 40127',
          at: AT,
          track: '7',
          position: 3,
          seen: true,
          by: 'Ada Quill',
          receivedAt: clock.now().toISOString(),
          retracted: null,
        },
      ],
      next: null,
    });
    expect(await queuedReports(db)).toEqual([[['QTKX40127', AT]]]);
  });

  test('that comes again is a duplicate, from whomever; another under its id is not taken', async () => {
    const seen = report();
    const others = await as('administrator');
    await clerk.post(PATH).send(body(seen)).expect(200);
    for (const person of [clerk, others]) {
      const again = await person.post(PATH).send(body(seen, seen)).expect(200);
      expect(again.body).toEqual({ ...none, duplicates: 2 });
    }
    for (const change of [{ seen: false }, { unit: 'QTKX 1' }, { position: 4 }]) {
      const other = await clerk.post(PATH).send(body({ ...seen, ...change }, report()));
      expect(other.body).toMatchObject({
        ...{ accepted: 1, duplicates: 0, rejected: 1 },
        problems: [{ index: 0, code: 'conflict' }],
      });
    }
    const { body: list } = await clerk.get(`${PATH}?unit=qtkx-40127&limit=200`).expect(200);
    expect(list.data.filter(({ id }: { id: string }) => id === seen.id)).toMatchObject([
      { seen: true, by: 'Ada Quill' },
    ]);
  });

  test('under an id of another site is not taken either', async () => {
    const birch = await buildSite(db, { code: 'BIRCH' });
    const elsewhere = await as('clerk', 'Bo Lark', [birch]);
    const seen = report();
    await elsewhere.post('/api/sites/BIRCH/hand-reports').send(body(seen)).expect(200);
    const answer = await clerk.post(PATH).send(body(seen)).expect(200);
    expect(answer.body.problems).toMatchObject([{ index: 0, code: 'conflict' }]);
    const back = await clerk.post(BACK).send({ ids: [seen.id] });
    expect(back.body.problems).toMatchObject([{ index: 0, code: 'unknown' }]);
  });

  test('of a time too far ahead or too long ago is turned away by itself', async () => {
    const reports = [
      report({ at: '2026-12-01T12:05:00.001Z' }),
      report({ at: '2026-12-01T12:05:00Z' }),
      report({ at: '2025-10-31T23:59:59Z' }),
    ];
    const { body: answer } = await clerk.post(PATH).send(body(...reports));
    expect(answer).toMatchObject({
      ...{ accepted: 1, duplicates: 0, rejected: 2 },
      problems: [
        { index: 0, code: 'clock-ahead' },
        { index: 2, code: 'too-old' },
      ],
    });
  });

  test('from eight senders at once, shuffled, is stored once', async () => {
    const all = Array.from({ length: 100 }, (_, n) => report({ unit: `QTKX ${n}` }));
    const answers = await Promise.all(
      Array.from({ length: 8 }, (_, client) =>
        clerk.post(PATH).send(body(...all.map((_one, i) => all[(i * 7 + client * 13) % 100]))),
      ),
    );
    expect(answers.map(({ status }) => status)).toEqual(Array(8).fill(200));
    const sum = (key: string) => answers.reduce((n, { body: told }) => n + told[key], 0);
    expect([sum('accepted'), sum('duplicates')]).toEqual([100, 700]);
    expect((await queuedReports(db)).flat()).toHaveLength(100);
  });

  test.each<[string, object, string]>([
    ['no reports', { track: '7' }, '/reports'],
    ['an empty list', body(), '/reports'],
    ['501 reports', body(...Array.from({ length: 501 }, () => report())), '/reports'],
    ['a track that is no text', { ...body(report()), track: 7 }, '/track'],
    ['a long track', { ...body(report()), track: 'x'.repeat(41) }, '/track'],
    ['a control character', { ...body(report()), track: 'a\u0000' }, '/track'],
    ['an id that is no UUID', body(report({ id: '7' })), '/reports/0/id'],
    ['no time', body(report({ at: undefined })), '/reports/0/at'],
    ['a time without offset', body(report({ at: '2026-12-01T11:00:00' })), '/reports/0/at'],
    ['a unit that is none', body(report(), report({ unit: 'ABC' })), '/reports/1/unit'],
    ['a number alone', body(report({ unit: '40127' })), '/reports/0/unit'],
    ['a wrong check digit', body(report({ unit: 'ZQXU 305438 7' })), '/reports/0/unit'],
    ['a position of 0', body(report({ position: 0 })), '/reports/0/position'],
    ['seen as text', body(report({ seen: 'yes' })), '/reports/0/seen'],
  ])('is refused whole with %s', async (_what, sent, pointer) => {
    const answer = await clerk.post(PATH).send(sent).expect(400);
    expect(answer.body.errors).toMatchObject([{ pointer }]);
    expect(await queuedReports(db)).toEqual([]);
    await clerk.post(PATH).send(body(report())).expect(200);
  });

  test('names every fault at once', async () => {
    const answer = await clerk
      .post(PATH)
      .send(body(report({ unit: 'x', at: 1 }), 7))
      .expect(400);
    expect(answer.body.errors.map(({ pointer }: { pointer: string }) => pointer).sort()).toEqual([
      '/reports/0/at',
      '/reports/0/unit',
      '/reports/1',
    ]);
  });

  test('is refused when it is empty, too large, no UTF-8 or of another type', async () => {
    const raw = (type: string, sent: string | Buffer) =>
      clerk
        .post(PATH)
        .set('Content-Type', type)
        .serialize((text: string) => text)
        .send(sent);
    await clerk.post(PATH).expect(400);
    await raw('application/json', `"${'x'.repeat(100_000)}"`).expect(413);
    await raw('application/json', Buffer.from([0x22, 0xff, 0x22])).expect(400);
    await raw('text/plain', '{}').expect(415);
  });
});

describe('a report that is taken back', () => {
  test('stays in the list as such, once, and its car is queued again', async () => {
    const [kept, gone] = [report(), report({ unit: 'QTKX 2' })];
    await clerk.post(PATH).send(body(kept, gone)).expect(200);
    clock.advance(60_000);
    const colleague = await as('clerk', 'Bo Lark');
    const ids = [gone.id.toUpperCase(), gone.id];
    const first = await colleague.post(BACK).send({ ids }).expect(200);
    expect(first.body).toEqual({ ...none, accepted: 1, duplicates: 1 });
    const second = await clerk.post(BACK).send({ ids }).expect(200);
    expect(second.body).toEqual({ ...none, duplicates: 2 });
    expect(await queuedReports(db)).toHaveLength(2);
    expect((await queuedReports(db))[1]).toEqual([['QTKX2', AT]]);
    const { body: list } = await clerk.get(`${PATH}?unit=QTKX2`).expect(200);
    expect(list.data).toMatchObject([
      { id: gone.id, retracted: { at: clock.now().toISOString(), by: 'Bo Lark' } },
    ]);
  });

  test('stays taken back when it is sent again, late', async () => {
    const gone = report();
    await clerk.post(PATH).send(body(gone)).expect(200);
    await clerk
      .post(BACK)
      .send({ ids: [gone.id] })
      .expect(200);
    const again = await clerk.post(PATH).send(body(gone)).expect(200);
    expect(again.body).toEqual({ ...none, duplicates: 1 });
    const { body: list } = await clerk.get(PATH).expect(200);
    expect(list.data[0].retracted).not.toBeNull();
  });

  test('before it came is unknown; the next try takes it', async () => {
    const gone = report();
    const early = await clerk
      .post(BACK)
      .send({ ids: [gone.id] })
      .expect(200);
    expect(early.body).toMatchObject({ rejected: 1, problems: [{ index: 0, code: 'unknown' }] });
    await clerk.post(PATH).send(body(gone)).expect(200);
    const later = await clerk
      .post(BACK)
      .send({ ids: [gone.id] })
      .expect(200);
    expect(later.body).toEqual({ ...none, accepted: 1 });
  });

  test('by eight at once goes back once', async () => {
    const all = Array.from({ length: 50 }, () => report());
    await clerk
      .post(PATH)
      .send(body(...all))
      .expect(200);
    const ids = all.map(({ id }) => id);
    const answers = await Promise.all(
      Array.from({ length: 8 }, (_, n) =>
        clerk.post(BACK).send({ ids: n % 2 ? ids : ids.toReversed() }),
      ),
    );
    expect(answers.map(({ status }) => status)).toEqual(Array(8).fill(200));
    expect(answers.reduce((n, { body: told }) => n + told.accepted, 0)).toBe(50);
  });

  test.each<[string, object, string]>([
    ['no ids', {}, '/ids'],
    ['an empty list', { ids: [] }, '/ids'],
    ['an id that is none', { ids: [randomUUID(), 'x'] }, '/ids/1'],
    ['501 ids', { ids: Array.from({ length: 501 }, () => randomUUID()) }, '/ids'],
  ])('is refused with %s', async (_what, sent, pointer) => {
    const answer = await clerk.post(BACK).send(sent).expect(400);
    expect(answer.body.errors).toMatchObject([{ pointer }]);
  });
});

describe('who may', () => {
  test.each<[Role, boolean, number, number]>([
    ['administrator', false, 200, 200],
    ['clerk', true, 200, 200],
    ['clerk', false, 403, 403],
    ['dispatcher', true, 403, 200],
    ['dispatcher', false, 403, 403],
    ['owner', true, 403, 403],
  ])('%s, own site %s: report %i, list %i', async (role, isOwn, reports, lists) => {
    const person = await as(role, 'Somebody', isOwn ? [site] : []);
    const mine = report();
    await person.post(PATH).send(body(mine)).expect(reports);
    await person
      .post(BACK)
      .send({ ids: [mine.id] })
      .expect(reports);
    await person.get(PATH).expect(lists);
  });

  test('nobody who is not signed in, nor at a site that is none', async () => {
    await request(app).post(PATH).send(body(report())).expect(401);
    await request(app).post(BACK).send({ ids: [] }).expect(401);
    await request(app).get(PATH).expect(401);
    await clerk.post('/api/sites/NOWHERE/hand-reports').send(body(report())).expect(404);
    await clerk.get('/api/sites/NOWHERE/hand-reports').expect(404);
  });

  test('nobody from another origin', async () => {
    const foreign = clerk.post(PATH).set('Origin', 'https://elsewhere.example');
    await foreign.send(body(report())).expect(403);
  });
});

describe('the list', () => {
  test('goes on page by page, latest first, also where many share an instant', async () => {
    const reports = Array.from({ length: 30 }, (_, n) => {
      return report({ at: `2026-12-01T11:${String(10 + Math.floor(n / 10))}:00Z` });
    });
    await clerk
      .post(PATH)
      .send(body(...reports))
      .expect(200);
    const got: { id: string; at: string }[] = [];
    let next: string | null = '';
    while (next !== null) {
      const { body: page } = await clerk.get(`${PATH}?limit=7${next && `&cursor=${next}`}`);
      got.push(...page.data);
      next = page.next as string | null;
    }
    expect(got.map(({ id }) => id).sort()).toEqual(reports.map(({ id }) => id).sort());
    const times = got.map(({ at }) => at);
    expect(times).toEqual(times.toSorted().reverse());
  });

  test.each(['limit=201', 'limit=0', 'cursor=x', 'unit=nothing', 'page=2'])(
    'refuses ?%s',
    async (query) => {
      await clerk.get(`${PATH}?${query}`).expect(400);
    },
  );
});
