import { expect } from 'vitest';
import { waitUntil } from '../../scripts/lib/processes.mjs';
import type { Configuration } from '../../server/domain/movements/configuration.js';
import type { Ledger } from '../../server/domain/movements/history-of.js';
import type { Database } from '../../server/lib/database.js';
import { dumpDatabase } from './dump-database.js';
import { dumpOf } from './dump-history.js';
import { expectSameHistory } from './expect-same-history.js';

const LOCK_WAIT_TIMEOUT = 1205;

/**
 * Waits until running servers have taken everything up; then the ledger of the database holds each
 * read and wheel record once, and its history is that of the whole ledger.
 */
export async function expectWholeHistory(
  db: Database,
  configuration: Configuration,
  ledger: Ledger,
): Promise<void> {
  await waitUntil(() => isTakenUp(db), 240_000);
  const counts = `SELECT (SELECT COUNT(*) FROM \`reads\`) AS \`reads\`,
    (SELECT COUNT(*) FROM wheel_records) AS wheels, (SELECT COUNT(*) FROM held) AS held,
    (SELECT COUNT(*) FROM work) AS work, (SELECT COUNT(*) FROM dirty_units) AS dirty`;
  expect(await db.pool.query(counts)).toEqual([
    { reads: ledger.reads.length, wheels: ledger.wheels.length, held: 0, work: 0, dirty: 0 },
  ]);
  expect(await readKeys(db)).toEqual(keysOf(ledger));
  const dump = await dumpDatabase(db, configuration);
  expectSameHistory(dump, dumpOf(ledger, configuration));
  expect(dump.length).toBeGreaterThan(ledger.reads.length / 20);
}

/** True when no worker has anything left to do. */
export async function isTakenUp(db: Database): Promise<boolean> {
  const [row] = await db.pool.query<{ waiting: number }[]>(
    'SELECT EXISTS (SELECT 1 FROM work) + EXISTS (SELECT 1 FROM dirty_units) AS waiting',
  );
  return row?.waiting === 0;
}

/** The natural keys of the stored reads, sorted. */
async function readKeys(db: Database): Promise<string[]> {
  const rows = await db.pool.query<
    { site_id: number; antenna_no: number; read_at: Date; tag: Buffer }[]
  >('SELECT site_id, antenna_no, read_at, tag FROM `reads`');
  return rows
    .map((row) => [row.site_id, row.antenna_no, row.read_at.getTime(), row.tag].join(' '))
    .sort();
}

function keysOf({ reads }: Ledger): string[] {
  return reads.map((read) => [read.siteId, read.antenna, read.at, read.tag].join(' ')).sort();
}

/** As if the time of every worker that was killed or paused had run out. */
export async function expireLeases(db: Database): Promise<void> {
  await db.pool.query('UPDATE worker_leases SET expires_at = NOW(3) - INTERVAL 1 SECOND');
}

/** True while a projector is within a transaction: it holds the row of its lease then. */
export async function isProjecting(db: Database): Promise<boolean> {
  try {
    await db.pool.query("SELECT 1 FROM worker_leases WHERE name = 'projector' FOR UPDATE NOWAIT");
    return false;
  } catch (error) {
    if ((error as { errno?: number }).errno === LOCK_WAIT_TIMEOUT) return true;
    throw error;
  }
}
