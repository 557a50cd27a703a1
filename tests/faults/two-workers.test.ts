import { expect, it } from 'vitest';
import { waitUntil } from '../../scripts/lib/processes.mjs';
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
import { useServerProcesses, type ServerProcess } from '../support/server-process.js';
import { storeConfiguration } from '../support/store-configuration.js';

const db = useTestDatabase();
const launch = useServerProcesses();
const isLong = import.meta.env.TEST_MODE === 'long';
const SEEDS = Array.from({ length: isLong ? 8 : 1 }, (_, index) => 401 + index);
const READS = isLong ? 6_000 : 1_200;
const TURNS = isLong ? 40 : 6;
const options = () => ({ databaseUrl: testDatabaseUrl() });

/** The projector's lease: who holds it, and how often it has gone to another. */
async function projectorLease(): Promise<{ holder: string; epoch: number }> {
  const [row] = await db.pool.query<{ holder: string; epoch: number }[]>(
    "SELECT holder, epoch FROM worker_leases WHERE name = 'projector'",
  );
  return row ?? { holder: '', epoch: 0 };
}

async function setExpiry(expression: string): Promise<void> {
  await db.pool.query(`UPDATE worker_leases SET expires_at = ${expression}`);
}

async function hasExpired(): Promise<boolean> {
  const [row] = await db.pool.query<{ expired: number }[]>(
    "SELECT expires_at < NOW(3) AS expired FROM worker_leases WHERE name = 'projector'",
  );
  return row?.expired === 1;
}

/** True when it sleeps now and holds no lock that others would wait for. */
async function pausesOutsideOfFold(server: ServerProcess): Promise<boolean> {
  server.pause();
  if (!(await isProjecting(db))) return true;
  server.resume();
  return false;
}

/** True while a statement waits for a lock on the table. */
async function isWaitingFor(table: string): Promise<boolean> {
  const rows = await db.pool.query<unknown[]>(
    `SELECT 1 FROM information_schema.processlist
      WHERE db = DATABASE() AND state LIKE 'Waiting for table%' AND info LIKE ?`,
    [`%${table}%`],
  );
  return rows.length > 0;
}

async function prepare(seed: number) {
  const random = new SeededRandom(seed);
  const { configuration, ledger: drawn } = disorderedCase(seed, READS);
  const ledger = untilNow(drawn);
  await storeConfiguration(db, configuration);
  const posts = postsOf(ledger, configuration, random);
  const tokens = await tokensOf(db, configuration);
  return { random, configuration, ledger, posts, tokens };
}

it.each(SEEDS)(
  'fold one history between them, whoever of them is at it (seed %i)',
  { timeout: isLong ? 900_000 : 300_000 },
  async (seed) => {
    const { random, configuration, ledger, posts, tokens } = await prepare(seed);
    const servers = await Promise.all([launch(options()), launch(options())]);
    await Promise.all(servers.map((server) => server.ready));
    const sending = sendUntilTaken(posts, tokens, () => random.pick(servers).address);
    // The lease is taken from a worker that lives and works, which must notice.
    for (let turn = 1; turn <= TURNS; turn += 1) {
      const least = (posts.length * turn) / (TURNS + 1);
      await waitUntil(() => sending.answered >= least, 60_000, 1);
      const { epoch } = await projectorLease();
      await waitUntil(
        async () => {
          await expireLeases(db);
          return (await projectorLease()).epoch > epoch;
        },
        10_000,
        1,
      );
    }
    await sending.done;
    expect((await projectorLease()).epoch).toBeGreaterThan(TURNS);
    expect(servers.every((server) => server.isRunning())).toBe(true);
    await expectWholeHistory(db, configuration, ledger);
  },
);

it(
  'commit nothing of what one of them had begun before it was paused past its time',
  { timeout: isLong ? 900_000 : 120_000 },
  async () => {
    const { configuration, ledger, posts, tokens } = await prepare(499);
    const third = Math.ceil(posts.length / 3);
    const send = (server: ServerProcess, from: number) =>
      sendUntilTaken(posts.slice(from, from + third), tokens, () => server.address).done;
    const sleeper = await launch(options());
    await sleeper.ready;
    await send(sleeper, 0);
    await waitUntil(() => isTakenUp(db), 30_000);
    const other = await launch(options());
    await other.ready;

    // The one that holds the lease sleeps while idle; reads come in by the other meanwhile.
    await waitUntil(() => pausesOutsideOfFold(sleeper), 10_000, 1);
    await setExpiry('NOW(3) + INTERVAL 60 SECOND');
    const before = await projectorLease();
    await send(other, third);

    // It wakes, reads the queue, and sleeps again just before its transaction begins.
    other.pause();
    const gate = await db.pool.getConnection();
    await gate.query('LOCK TABLES config_state WRITE');
    sleeper.resume();
    await waitUntil(() => isWaitingFor('config_state'), 20_000, 1);
    sleeper.pause();
    await gate.query('UNLOCK TABLES');
    await gate.release();
    expect(await isTakenUp(db)).toBe(false);
    expect(await isProjecting(db)).toBe(false);

    // Its time runs out, and the other one does all of it before it wakes.
    if (isLong) await waitUntil(hasExpired, 60_000);
    else await expireLeases(db);
    other.resume();
    await waitUntil(() => isTakenUp(db), 30_000);
    expect(await projectorLease()).toMatchObject({ epoch: before.epoch + 1 });

    // A mark that a fold of those reads wipes off. When the sleeper holds the lease again, it is
    // through with what it had begun.
    await waitUntil(() => pausesOutsideOfFold(other), 10_000, 1);
    await db.pool.query('UPDATE passages SET read_count = read_count + 1000');
    sleeper.resume();
    await expireLeases(db);
    await waitUntil(async () => (await projectorLease()).epoch > before.epoch + 1, 20_000);
    expect((await projectorLease()).holder).toBe(before.holder);
    const wiped = await db.pool.query<{ count: number }[]>(
      'SELECT COUNT(*) AS count FROM passages WHERE read_count <= 1000',
    );
    expect(wiped).toEqual([{ count: 0 }]);
    await db.pool.query('UPDATE passages SET read_count = read_count - 1000');

    // It has lost nothing but its turn.
    other.resume();
    await send(sleeper, 2 * third);
    await expectWholeHistory(db, configuration, ledger);
  },
);

it('answer both, though the queue is never empty and the other one is at it', async () => {
  await prepare(498);
  // A worker on another machine, and a batch that it has not come to yet.
  await db.pool.query(
    `INSERT INTO worker_leases (name, holder, epoch, expires_at)
     VALUES ('projector', 'another machine', 1, NOW(3) + INTERVAL 60 SECOND)`,
  );
  await db.pool.query(
    `INSERT INTO work (kind, lane, read_count, received_at) VALUES ('reads', 0, 0, NOW(3))`,
  );
  const server = await launch(options());
  await server.ready;
  const health = await fetch(`${server.address}/api/health`);
  expect(health.status).toBe(200);
  expect(await health.json()).toMatchObject({ projectorLagMs: expect.any(Number) });
  expect(await isTakenUp(db)).toBe(false);
  expect((await projectorLease()).holder).toBe('another machine');
});
