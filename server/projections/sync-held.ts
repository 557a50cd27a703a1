import type { PoolConnection } from 'mariadb';
import type { Network } from '../domain/movements/configuration.js';
import { isDoorFact, verdictOf } from '../domain/movements/resolve-read.js';
import { byKeys, insertRows } from '../lib/bulk.js';
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
  const free = judged.filter(({ code }) => code === null);
  await byKeys(
    connection,
    'DELETE FROM held WHERE :keys',
    'batch_id = ? AND seq = ?',
    free.map(({ read }) => [read.batchId, read.seq]),
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
