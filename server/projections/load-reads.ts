import type { Pool } from 'mariadb';
import type { LedgerRead } from '../domain/movements/resolve-read.js';
import { inParts } from '../lib/bulk.js';

/** A read of the ledger with what tells its row. */
export interface StoredRead extends LedgerRead {
  batchId: number;
  seq: number;
}

/** A row of `reads` as far as history is concerned. */
export interface ReadRow {
  batch_id: number;
  seq: number;
  site_id: number;
  antenna_no: number;
  tag: Buffer;
  read_at: Date;
  hold_code: string | null;
}

export const READ_COLUMNS = 'batch_id, seq, site_id, antenna_no, tag, read_at, hold_code';

/** What the door said of a clock that was ahead stands until somebody releases the read. */
const RELEASABLE = 'clock-ahead';

/** The reads of whole batches. */
export async function loadReads(pool: Pool, batches: readonly number[]): Promise<StoredRead[]> {
  if (batches.length === 0) return [];
  const rows = await pool.query<ReadRow[]>(
    `SELECT ${READ_COLUMNS} FROM \`reads\` WHERE batch_id IN (?)`,
    [batches],
  );
  return withReleases(pool, rows);
}

const READS_A_STATEMENT = 500;

/** The reads that somebody released, by batch, place and time. */
export async function loadReleased(
  pool: Pool,
  released: readonly (readonly [batchId: number, seq: number, readAt: string])[],
): Promise<StoredRead[]> {
  const rows: ReadRow[] = [];
  for (const part of inParts(released, READS_A_STATEMENT)) {
    const found = await pool.query<ReadRow[]>(
      `SELECT ${READ_COLUMNS} FROM \`reads\`
       WHERE ${part.map(() => '(batch_id = ? AND seq = ? AND read_at = ?)').join(' OR ')}`,
      part.flatMap(([batchId, seq, readAt]) => [batchId, seq, new Date(readAt)]),
    );
    rows.push(...found);
  }
  return withReleases(pool, rows);
}

/** Rows as reads of the ledger, with what is known of releases. */
export async function withReleases(
  pool: Pick<Pool, 'query'>,
  rows: readonly ReadRow[],
): Promise<StoredRead[]> {
  const batches = new Set(
    rows.filter((row) => row.hold_code === RELEASABLE).map((row) => row.batch_id),
  );
  const released = new Set<string>();
  if (batches.size) {
    const found = await pool.query<{ batch_id: number; seq: number }[]>(
      'SELECT batch_id, seq FROM releases WHERE batch_id IN (?)',
      [[...batches]],
    );
    for (const row of found) released.add(`${row.batch_id} ${row.seq}`);
  }
  return rows.map((row) => ({
    batchId: row.batch_id,
    seq: row.seq,
    siteId: row.site_id,
    antenna: row.antenna_no,
    tag: row.tag.toString(),
    at: row.read_at.getTime(),
    holdCode: released.has(`${row.batch_id} ${row.seq}`) ? null : row.hold_code,
  }));
}
