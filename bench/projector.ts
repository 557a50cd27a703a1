import { mkdtempSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { pathToFileURL } from 'node:url';
import { startMariadb } from '../scripts/lib/mariadb.mjs';
import { readEnv } from '../server/config/env.js';
import { insertRows, type SqlValue } from '../server/lib/bulk.js';
import { systemClock } from '../server/lib/clock.js';
import { openDatabase, withTransaction, type Database } from '../server/lib/database.js';
import { LiveEvents } from '../server/lib/live-events.js';
import { createLogger } from '../server/lib/logger.js';
import { createProjector } from '../server/projections/projector.js';
import { LANES } from '../server/domain/lanes.js';
import { takeWork } from '../server/projections/take-work.js';
import { feedTraffic } from '../server/simulator/seed-traffic.js';
import { seedDemo } from '../tests/support/demo-seed.js';
import { migrate } from '../tests/support/migrations.js';

const RUNS = 3;
const DAYS = 12;
const UNTIL = new Date('2026-03-02T06:00:00Z');
const MOST_READS = 20_000;
const PROJECTIONS = [
  'passages',
  'passes',
  'dirty_units',
  'stays',
  'legs',
  'unit_folds',
  'last_seen',
  'visible_units',
  'doubts',
  'pass_aliases',
  'stay_aliases',
];

/**
 * Reads a second that the projector folds from a full queue into passages, passes, stays, legs and
 * last seen, every transaction durable; beside it, in turns and from the same queue, the bare
 * drain: the same batches read by primary key and their queue rows deleted. The traffic is twelve
 * days of the demo, strangers and switching included.
 */
export default async function bench(): Promise<void> {
  const mariadb = await startMariadb({
    dir: mkdtempSync(path.join(os.tmpdir(), 'fishplate-bench-')),
    throwAway: true,
    durable: true,
    database: 'bench',
  });
  const db = openDatabase(mariadb.url());
  try {
    await migrate(db.sequelize);
    await seedDemo(db);
    await measure(db, mariadb.url());
  } finally {
    await db.close();
    await mariadb.stop();
  }
}

async function measure(db: Database, databaseUrl: string): Promise<void> {
  const env = readEnv({
    DATABASE_URL: databaseUrl,
    SESSION_SECRET: 'a secret for this measurement only, 0123456789',
  });
  const logger = createLogger('silent');
  const context = { env, db, clock: systemClock, logger, liveEvents: new LiveEvents() };
  await feedTraffic(context, { until: UNTIL, days: DAYS });
  const queue = await db.pool.query<Record<string, SqlValue>[]>('SELECT * FROM work ORDER BY id');
  const reads = queue.reduce((sum, row) => sum + Number(row['read_count']), 0);
  const bare: number[] = [];
  const folded: number[] = [];
  for (let run = 0; run < RUNS; run += 1) {
    await refill(db, queue);
    bare.push(await rateOf(reads, () => drainBare(db)));
    await refill(db, queue);
    folded.push(await rateOf(reads, () => createProjector(context).drain()));
    await requireHistory(db);
  }
  const [floor, best] = [Math.max(...bare), Math.max(...folded)];
  console.log(`projector: ${reads} reads in ${queue.length} batches`);
  console.log(`  bare drain  ${floor} reads/s  (${bare.join(', ')})`);
  console.log(`  folded      ${best} reads/s  (${folded.join(', ')}), aim 8,000`);
  console.log(`  ratio       ${(best / floor).toFixed(3)}`);
}

/** Forgets all history, and puts all batches of the ledger back into the queue. */
async function refill({ pool }: Database, queue: readonly Record<string, SqlValue>[]) {
  for (const table of [...PROJECTIONS, 'work', 'worker_leases']) {
    await pool.query(`TRUNCATE ${table}`);
  }
  const columns = Object.keys(queue[0] ?? {});
  const rows = queue.map((row) => columns.map((column) => row[column] ?? null));
  await withTransaction(pool, (connection) => insertRows(connection, 'work', columns, rows));
}

async function drainBare({ pool }: Database): Promise<void> {
  for (;;) {
    const work = await takeWork(pool, LANES.live, MOST_READS);
    if (!work) return;
    await withTransaction(pool, (connection) =>
      connection.query('DELETE FROM work WHERE id IN (?)', [work.ids]),
    );
  }
}

async function requireHistory({ pool }: Database): Promise<void> {
  const [row] = await pool.query<{ n: number }[]>('SELECT COUNT(*) AS n FROM stays');
  if (!row?.n) throw new Error('The projector wrote no stays.');
}

async function rateOf(reads: number, run: () => Promise<void>): Promise<number> {
  const begin = performance.now();
  await run();
  return Math.round((reads * 1_000) / (performance.now() - begin));
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) await bench();
