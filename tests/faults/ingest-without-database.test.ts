import { expect, test } from 'vitest';
import { openDatabase } from '../../server/lib/database.js';
import { buildContext } from '../support/context.js';
import { testDatabaseUrl, useTestDatabase } from '../support/database.js';
import { buildIngestApp, buildReader, carTag, postReads, storedReads } from '../support/ingest.js';

const db = useTestDatabase();
const context = buildContext(db);
const app = buildIngestApp(context);
const readsOf = (...numbers: number[]) => ({
  reads: numbers.map((number) => ({
    antenna: 1,
    tag: carTag(number),
    readAt: context.clock.now().toISOString(),
  })),
});

test('a connection killed within the transaction: 503, nothing stored, all taken the next time', async () => {
  const { token } = await buildReader(db);
  const blocker = await db.pool.getConnection();
  try {
    // An open transaction holds one of the keys, so that the next one waits inside its insert.
    await postReads(app, token, readsOf(2)).expect(200);
    await blocker.beginTransaction();
    await blocker.query('SELECT * FROM `reads` FOR UPDATE');
    const waiting = postReads(app, token, readsOf(1, 2, 3)).then((answer) => answer);
    const id = await waitForInsert();
    await blocker.query('KILL CONNECTION ?', [id]);
    const answer = await waiting;
    expect(answer.status).toBe(503);
    expect(answer.headers['retry-after']).toBeDefined();
    expect(answer.type).toBe('application/problem+json');
  } finally {
    await blocker.rollback();
    await blocker.release();
  }
  expect(await storedReads(db)).toHaveLength(1);
  const { body } = await postReads(app, token, readsOf(1, 2, 3)).expect(200);
  expect(body).toMatchObject({ accepted: 2, duplicates: 1 });
});

test('no database: 503, and the next request finds it again', async () => {
  const { token } = await buildReader(db);
  const closing = openDatabase(testDatabaseUrl(), { connections: 1 });
  const orphan = buildIngestApp({ ...context, db: closing });
  await postReads(orphan, token, readsOf(1)).expect(200);
  await closing.close();
  const { body } = await postReads(orphan, token, readsOf(2)).expect(503);
  expect(body).toMatchObject({ status: 503 });
  await postReads(app, token, readsOf(2)).expect(200);
});

/** Id of the connection that waits inside its insert of reads. */
async function waitForInsert(): Promise<number> {
  for (;;) {
    const [row] = await db.pool.query<{ id: number }[]>(
      `SELECT id FROM information_schema.processlist
        WHERE info LIKE 'INSERT INTO \`reads\`%' AND db = DATABASE()`,
    );
    if (row) return row.id;
  }
}
