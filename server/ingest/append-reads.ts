import type { PoolConnection, UpsertResult } from 'mariadb';
import type { HoldCode } from '../contract/ingest.js';
import type { SoundRead } from './judge-read.js';
import { sqlBytes, sqlCode, sqlInstant } from './sql-literals.js';

/** A sound read with the door's verdict. */
export interface DoorRead {
  read: SoundRead;
  hold: HoldCode | null;
}

export interface Batch {
  siteId: number;
  receivedAt: Date;
  configVersion: number;
  /** Sound reads in any order; each index once. */
  reads: DoorRead[];
}

/**
 * Appends a batch inside the caller's transaction, its row of `work` first, and returns the reads
 * that were new; the rest were there already. A batch without a new read leaves nothing behind.
 */
export async function appendReads(connection: PoolConnection, batch: Batch): Promise<DoorRead[]> {
  const work = await connection.query<UpsertResult>(
    'INSERT INTO work (kind, lane, read_count, received_at) VALUES (?, 0, ?, ?)',
    ['reads', batch.reads.length, batch.receivedAt],
  );
  const batchId = work.insertId as number;
  const stored = await insertReads(connection, batchId, batch);
  if (stored.length === 0) {
    await connection.query('DELETE FROM work WHERE id = ?', [batchId]);
  } else if (stored.length < batch.reads.length) {
    await connection.query('UPDATE work SET read_count = ? WHERE id = ?', [stored.length, batchId]);
  }
  await insertHeld(connection, batchId, batch, stored);
  return stored;
}

async function insertReads(
  connection: PoolConnection,
  batchId: number,
  { siteId, receivedAt, configVersion, reads }: Batch,
): Promise<DoorRead[]> {
  const shared = `(${batchId},${siteId},${configVersion},${sqlInstant(receivedAt.getTime())}`;
  const values = reads.toSorted(byNaturalKey).map(({ read, hold }) => {
    const { index, antenna, tag, readAtMs, rssi, count } = read;
    const key = `${index},${antenna},${sqlBytes(tag.value)},${sqlInstant(readAtMs)}`;
    return `${shared},${key},${rssi},${count},${sqlCode(hold)})`;
  });
  // Setting a column to itself makes a repeat count 0 rows and keeps the first read as it came;
  // unlike IGNORE it lets every other fault through.
  const result = await connection.query<UpsertResult>(
    `INSERT INTO \`reads\` (batch_id, site_id, config_version, received_at, seq, antenna_no, tag,
       read_at, rssi, read_count, hold_code)
     VALUES ${values.join()}
     ON DUPLICATE KEY UPDATE antenna_no = \`reads\`.antenna_no`,
  );
  if (result.affectedRows === reads.length) return reads;
  const present = await connection.query<{ seq: number }[]>(
    'SELECT seq FROM `reads` WHERE batch_id = ?',
    [batchId],
  );
  const seqs = new Set(present.map((row) => row.seq));
  return reads.filter(({ read }) => seqs.has(read.index));
}

/** One order for all writers, so that two of them never wait for each other in a circle. */
function byNaturalKey({ read: a }: DoorRead, { read: b }: DoorRead): number {
  if (a.antenna !== b.antenna) return a.antenna - b.antenna;
  if (a.readAtMs !== b.readAtMs) return a.readAtMs - b.readAtMs;
  if (a.tag.value === b.tag.value) return a.index - b.index;
  return a.tag.value < b.tag.value ? -1 : 1;
}

async function insertHeld(
  connection: PoolConnection,
  batchId: number,
  { siteId, configVersion }: Batch,
  stored: DoorRead[],
): Promise<void> {
  const held = stored.filter(({ hold }) => hold !== null);
  if (held.length === 0) return;
  const values = held.map(({ read: { index, readAtMs, tag }, hold }) => {
    const facts = `${sqlInstant(readAtMs)},${siteId},${sqlBytes(tag.value)},${sqlCode(hold)}`;
    return `(${batchId},${index},${facts},${configVersion})`;
  });
  await connection.query(
    `INSERT INTO held (batch_id, seq, read_at, site_id, tag, code, config_version)
     VALUES ${values.join()}`,
  );
}
