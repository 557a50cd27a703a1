import { randomUUID } from 'node:crypto';
import { expect, test } from 'vitest';
import { openDatabase } from '../../server/lib/database.js';
import { buildContext } from '../support/context.js';
import { testDatabaseUrl, useTestDatabase } from '../support/database.js';
import { buildPerson, buildSite, signIn } from '../support/factories.js';
import { buildIngestApp } from '../support/ingest.js';
import { buildReporter, postReports, queuedReports, storedReports } from '../support/reports.js';

const db = useTestDatabase();
const context = buildContext(db);
const app = buildIngestApp(context);
const reportsOf = (site: string, ...references: string[]) => ({
  source: 'car-desk',
  reports: references.map((reference) => ({
    reference,
    unit: 'QTKX 40127',
    event: 'arrived',
    at: context.clock.now().toISOString(),
    site,
  })),
});

test('a connection killed within the transaction: 503, nothing stored, all taken the next time', async () => {
  const [{ token }, site] = [await buildReporter(context), await buildSite(db)];
  await postReports(app, token, reportsOf(site.code, 'b')).expect(200);
  const blocker = await db.pool.getConnection();
  try {
    // An open transaction holds one of the keys, so that the next one waits inside its insert.
    await blocker.beginTransaction();
    await blocker.query('SELECT * FROM movement_reports FOR UPDATE');
    const waiting = postReports(app, token, reportsOf(site.code, 'a', 'b', 'c')).then((a) => a);
    await blocker.query('KILL CONNECTION ?', [await waitForInsert('movement_reports')]);
    const answer = await waiting;
    expect(answer.status).toBe(503);
    expect(answer.headers['retry-after']).toBeDefined();
    expect(answer.type).toBe('application/problem+json');
  } finally {
    await blocker.rollback();
    await blocker.release();
  }
  expect([(await storedReports(db)).length, (await queuedReports(db)).length]).toEqual([1, 1]);
  const { body } = await postReports(app, token, reportsOf(site.code, 'a', 'b', 'c')).expect(200);
  expect(body).toEqual({ accepted: 2, duplicates: 1, rejected: 0, problems: [] });
});

test('no database: 503 for a report, and the next request finds it again', async () => {
  const [{ token }, site] = [await buildReporter(context), await buildSite(db)];
  const closing = openDatabase(testDatabaseUrl(), { connections: 1 });
  const orphan = buildIngestApp({ ...context, db: closing });
  await postReports(orphan, token, reportsOf(site.code, 'a')).expect(200);
  await closing.close();
  const { body } = await postReports(orphan, token, reportsOf(site.code, 'b')).expect(503);
  expect(body).toMatchObject({ status: 503 });
  await postReports(app, token, reportsOf(site.code, 'b')).expect(200);
});

test('a report by eye whose connection is killed: 503, and the same again is stored once', async () => {
  const site = await buildSite(db);
  const clerk = await signIn(app, await buildPerson(db, { roles: ['clerk'], sites: [site] }));
  const report = () => ({
    ...{ id: randomUUID(), unit: 'QTKX 40127', seen: true },
    at: context.clock.now().toISOString(),
  });
  const [first, second] = [report(), report()];
  const post = (...reports: object[]) =>
    clerk.post(`/api/sites/${site.code}/hand-reports`).send({ track: '7', reports });
  await post(first).expect(200);
  const blocker = await db.pool.getConnection();
  try {
    await blocker.beginTransaction();
    await blocker.query('SELECT * FROM hand_reports FOR UPDATE');
    const waiting = post(first, second).then((answer) => answer);
    await blocker.query('KILL CONNECTION ?', [await waitForInsert('hand_reports')]);
    expect((await waiting).status).toBe(503);
  } finally {
    await blocker.rollback();
    await blocker.release();
  }
  const { body } = await post(first, second).expect(200);
  expect(body).toEqual({ accepted: 1, duplicates: 1, rejected: 0, problems: [] });
});

/** Id of the connection that waits inside its insert into the table. */
async function waitForInsert(table: string): Promise<number> {
  for (;;) {
    const [row] = await db.pool.query<{ id: number }[]>(
      `SELECT id FROM information_schema.processlist
        WHERE info LIKE CONCAT('INSERT INTO ', ?, '%') AND db = DATABASE()`,
      [table],
    );
    if (row) return row.id;
  }
}
