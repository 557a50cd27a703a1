import type { PoolConnection } from 'mariadb';
import type { Network } from '../domain/movements/configuration.js';
import { isDoorFact, verdictOf } from '../domain/movements/resolve-read.js';
import { insertRows } from '../lib/bulk.js';
import type { StoredRead } from './load-reads.js';

const COLUMNS = ['batch_id', 'seq', 'read_at', 'site_id', 'tag', 'code', 'config_version'];

/**
 * Brings the reads that are set aside in line with the configuration: a verdict of the door is
 * taken back or renewed where the configuration has changed since. `all`: whatever is stored of
 * these reads may be out of date, else only where the door had judged otherwise.
 */
export async function syncHeld(
  connection: PoolConnection,
  { network, version }: { network: Network; version: number },
  reads: readonly StoredRead[],
  { all }: { all: boolean },
): Promise<void> {
  const judged = reads
    .filter((read) => !isDoorFact(read.holdCode))
    .map((read) => ({ read, code: verdictOf(network, read) }))
    .filter(({ read, code }) => all || code !== read.holdCode);
  await remove(
    connection,
    judged.filter(({ code }) => code === null).map(({ read }) => read),
  );
  const held = judged.flatMap(({ read, code }) =>
    code === null
      ? []
      : [
          [
            read.batchId,
            read.seq,
            new Date(read.at),
            read.siteId,
            Buffer.from(read.tag),
            code,
            version,
          ],
        ],
  );
  await insertRows(connection, 'held', COLUMNS, held, ['code', 'config_version']);
}

/** By one key at a time: a list of keys would go through the whole table and its locks. */
async function remove(connection: PoolConnection, reads: readonly StoredRead[]): Promise<void> {
  if (reads.length === 0) return;
  const there = await connection.query<{ batch_id: number; seq: number }[]>(
    'SELECT batch_id, seq FROM held WHERE batch_id IN (?)',
    [[...new Set(reads.map(({ batchId }) => batchId))]],
  );
  const free = new Set(reads.map(({ batchId, seq }) => `${batchId} ${seq}`));
  const keys = there
    .filter((row) => free.has(`${row.batch_id} ${row.seq}`))
    .map((row) => [row.batch_id, row.seq]);
  if (keys.length) await connection.batch('DELETE FROM held WHERE batch_id = ? AND seq = ?', keys);
}
