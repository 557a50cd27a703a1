import { afterAll, expect, it } from 'vitest';
import { waitUntil } from '../../scripts/lib/processes.mjs';
import { openDatabase } from '../../server/lib/database.js';
import { disorderedCase } from '../support/disordered-ledger.js';
import { expectWholeHistory } from '../support/history-that-stands.js';
import { postsOf, tokensOf, untilNow } from '../support/ledger-posts.js';
import { useOwnMariadb } from '../support/own-mariadb.js';
import { SeededRandom } from '../support/seeded-random.js';
import { sendUntilTaken } from '../support/send-until-taken.js';
import { useServerProcesses } from '../support/server-process.js';
import { storeConfiguration } from '../support/store-configuration.js';

const mariadb = await useOwnMariadb();
const db = openDatabase(mariadb.url, { connections: 3 });
afterAll(() => db.close());
const launch = useServerProcesses();
const isLong = import.meta.env.TEST_MODE === 'long';
const READS = isLong ? 6_000 : 1_000;
const ENDS = Array.from({ length: isLong ? 10 : 2 }, (_, index) =>
  index % 2 ? ('SIGKILL' as const) : ('SIGTERM' as const),
);

it(
  'is answered 503 while the database is away, and each read is stored once when it is back',
  { timeout: isLong ? 900_000 : 300_000 },
  async () => {
    const random = new SeededRandom(601);
    const { configuration, ledger: drawn } = disorderedCase(601, READS);
    const ledger = untilNow(drawn);
    await storeConfiguration(db, configuration);
    const tokens = await tokensOf(db, configuration);
    const posts = postsOf(ledger, configuration, random);
    const server = await launch({ databaseUrl: mariadb.url });
    await server.ready;

    // What is sent first is sent again, so that a request waits for the lock of a read it repeats.
    const portions = ENDS.map((_, index) => posts.filter((_post, n) => n % ENDS.length === index));
    for (const [index, signal] of ENDS.entries()) {
      const portion = portions[index] ?? [];
      const [first] = portion.filter(({ path }) => path === '/api/ingest/reads');
      await sendUntilTaken(first ? [first] : [], tokens, () => server.address).done;
      const blocker = await db.pool.getConnection();
      await blocker.beginTransaction();
      await blocker.query('SELECT * FROM `reads` FOR UPDATE');
      const sending = sendUntilTaken(portion, tokens, () => server.address);
      await waitUntil(insertWaits, 20_000, 5);
      await mariadb.end(signal);
      await blocker.rollback().catch(() => undefined);
      await blocker.release();

      await waitUntil(() => sending.refusals.length > 0, 20_000);
      for (const refusal of sending.refusals) {
        expect(refusal.status).toBe(503);
        expect(refusal.type).toContain('application/problem+json');
        expect(Number(refusal.retryAfter)).toBeGreaterThan(0);
      }
      const health = await fetch(`${server.address}/api/health`);
      expect(health.status).toBe(503);
      expect(await health.json()).toMatchObject({ status: 503 });

      await mariadb.start();
      await sending.done;
    }
    expect(server.isRunning()).toBe(true);
    await expectWholeHistory(db, configuration, ledger);
  },
);

/** True while a request waits inside its insert of reads. */
async function insertWaits(): Promise<boolean> {
  const rows = await db.pool.query<unknown[]>(
    `SELECT 1 FROM information_schema.processlist
      WHERE info LIKE 'INSERT INTO \`reads\`%' AND db = DATABASE()`,
  );
  return rows.length > 0;
}
