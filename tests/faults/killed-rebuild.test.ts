import { expect, it } from 'vitest';
import { freePort } from '../../scripts/lib/mariadb.mjs';
import { waitUntil } from '../../scripts/lib/processes.mjs';
import type { Configuration } from '../../server/domain/movements/configuration.js';
import type { Ledger } from '../../server/domain/movements/history-of.js';
import { withTransaction } from '../../server/lib/database.js';
import { planRebuild } from '../../server/services/plan-rebuild.js';
import { testDatabaseUrl, useTestDatabase } from '../support/database.js';
import { disorderedCase } from '../support/disordered-ledger.js';
import {
  expectWholeHistory,
  expireLeases,
  isProjecting,
  isTakenUp,
} from '../support/history-that-stands.js';
import { postsOf, tokensOf, untilNow } from '../support/ledger-posts.js';
import { SeededRandom } from '../support/seeded-random.js';
import { sendUntilTaken } from '../support/send-until-taken.js';
import { useServerProcesses } from '../support/server-process.js';
import { storeConfiguration } from '../support/store-configuration.js';

const db = useTestDatabase();
const launch = useServerProcesses();
const isLong = import.meta.env.TEST_MODE === 'long';
const SEEDS = Array.from({ length: isLong ? 8 : 1 }, (_, index) => 801 + index);
const READS = isLong ? 6_000 : 1_000;
const KILLS = isLong ? 8 : 2;

it.each(SEEDS)(
  'makes all history anew though the server is killed over it and reads come in meanwhile (seed %i)',
  { timeout: isLong ? 900_000 : 300_000 },
  async (seed) => {
    const random = new SeededRandom(seed);
    const { configuration, ledger: drawn } = disorderedCase(seed, READS);
    const ledger = untilNow(drawn);
    await storeConfiguration(db, configuration);
    const posts = postsOf(ledger, configuration, random);
    const tokens = await tokensOf(db, configuration);
    const at = { port: await freePort(), databaseUrl: testDatabaseUrl() };
    let server = await launch(at);
    const half = Math.ceil(posts.length / 2);
    await sendUntilTaken(posts.slice(0, half), tokens, () => server.address).done;
    await waitUntil(() => isTakenUp(db), 60_000);
    // What no fold would write, so that nothing but the rebuild can put it right.
    await db.pool.query('UPDATE passages SET read_count = read_count + 1000');
    await planAll(configuration, ledger);

    const sending = sendUntilTaken(posts.slice(half), tokens, () => server.address);
    let inFold = 0;
    for (let kill = 1; kill <= KILLS; kill += 1) {
      const share = random.between(kill - 1, kill) / KILLS;
      await waitUntil(async () => (await doneShare()) >= share * 0.9, 60_000, 1);
      await waitUntil(() => isProjecting(db), 2_000, 1);
      inFold += (await isProjecting(db)) ? 1 : 0;
      await server.kill();
      await expireLeases(db);
      server = await launch(at);
    }
    await server.ready;
    await sending.done;
    expect(await waitUntil(async () => (await doneShare()) === 1, 120_000)).toBe(true);
    expect(inFold).toBeGreaterThan(0);
    await expectWholeHistory(db, configuration, ledger);
  },
);

async function planAll({ readPoints }: Configuration, { reads }: Ledger): Promise<void> {
  const times = reads.map((read) => read.at);
  const since = new Date(Math.min(...times));
  const until = new Date(Math.max(...times));
  const spans = readPoints.map(({ id }) => ({ readPointId: id, since, until }));
  const plan = { cause: 'command' as const, label: 'All', requestedBy: null, spans };
  await withTransaction(db.pool, (connection) => planRebuild(connection, plan));
}

/** How much of the rebuild is done, by its spans' time. */
async function doneShare(): Promise<number> {
  const [row] = await db.pool.query<{ state: string; share: number }[]>(
    `SELECT r.state, AVG(TIMESTAMPDIFF(SECOND, s.since_at, s.next_at)
         / TIMESTAMPDIFF(SECOND, s.since_at, s.until_at)) AS share
       FROM rebuilds r JOIN rebuild_spans s ON s.rebuild_id = r.id GROUP BY r.id`,
  );
  return row?.state === 'done' ? 1 : Math.min(row?.share ?? 0, 0.999);
}
