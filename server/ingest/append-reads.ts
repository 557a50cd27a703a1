import type { PoolConnection, UpsertResult } from 'mariadb';
import type { HoldCode } from '../contract/ingest.js';
import type { SoundRead } from './judge-read.js';
import { partReads, type Part } from './part-reads.js';
import { sqlBytes, sqlCode, sqlInstant } from './sql-literals.js';

/** A sound read with the door's verdict. */
export interface DoorRead {
  read: SoundRead;
  hold: HoldCode | null;
}

/** The sound reads of one request. */
export interface Delivery {
  siteId: number;
  receivedAt: Date;
  configVersion: number;
  /** In any order; each index once. */
  reads: DoorRead[];
}

interface BatchRead extends DoorRead {
  batchId: number;
}

/**
 * Appends the reads of a request inside the caller's transaction, as one batch or, where some are
 * late, as several, their rows of `work` first. Returns the reads that were new; the rest were
 * there already. A batch without a new read leaves nothing behind.
 */
export async function appendReads(
  connection: PoolConnection,
  delivery: Delivery,
): Promise<DoorRead[]> {
  const parts = partReads(delivery.reads, delivery.receivedAt);
  const batchIds = await queueParts(connection, parts, delivery.receivedAt);
  const reads = parts.flatMap((part, index) =>
    part.reads.map((read) => ({ ...read, batchId: batchIds[index] as number })),
  );
  const stored = await insertReads(connection, delivery, reads, batchIds);
  if (stored.length < reads.length) await correctCounts(connection, parts, batchIds, stored);
  await insertHeld(connection, delivery, stored);
  return stored;
}

/** The ids of the new rows of `work`, in the order of the parts. */
async function queueParts(
  connection: PoolConnection,
  parts: Part[],
  receivedAt: Date,
): Promise<number[]> {
  const rows = await connection.query<{ id: number }[]>(
    `INSERT INTO work (kind, lane, read_count, received_at)
     VALUES ${parts.map(() => "('reads', ?, ?, ?)").join()} RETURNING id`,
    parts.flatMap(({ lane, reads }) => [lane, reads.length, receivedAt]),
  );
  return rows.map(({ id }) => id);
}

/** One statement for all batches, so that its rows go in by one order whatever their lane. */
async function insertReads(
  connection: PoolConnection,
  { siteId, receivedAt, configVersion }: Delivery,
  reads: BatchRead[],
  batchIds: number[],
): Promise<BatchRead[]> {
  const shared = `${siteId},${configVersion},${sqlInstant(receivedAt.getTime())}`;
  const values = reads.toSorted(byNaturalKey).map(({ read, hold, batchId }) => {
    const { index, antenna, tag, readAtMs, rssi, count } = read;
    const key = `${index},${antenna},${sqlBytes(tag.value)},${sqlInstant(readAtMs)}`;
    return `(${batchId},${shared},${key},${rssi},${count},${sqlCode(hold)})`;
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
    'SELECT seq FROM `reads` WHERE batch_id IN (?)',
    [batchIds],
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

/** Brings the rows of `work` in line with what was new, where some reads were not. */
async function correctCounts(
  connection: PoolConnection,
  parts: Part[],
  batchIds: number[],
  stored: BatchRead[],
): Promise<void> {
  const counts = new Map(batchIds.map((id) => [id, 0]));
  for (const { batchId } of stored) counts.set(batchId, (counts.get(batchId) ?? 0) + 1);
  const empty = batchIds.filter((id) => counts.get(id) === 0);
  if (empty.length > 0) await connection.query('DELETE FROM work WHERE id IN (?)', [empty]);
  for (const [index, id] of batchIds.entries()) {
    const count = counts.get(id) ?? 0;
    if (count === 0 || count === parts[index]?.reads.length) continue;
    await connection.query('UPDATE work SET read_count = ? WHERE id = ?', [count, id]);
  }
}

async function insertHeld(
  connection: PoolConnection,
  { siteId, configVersion }: Delivery,
  stored: BatchRead[],
): Promise<void> {
  const held = stored.filter(({ hold }) => hold !== null);
  if (held.length === 0) return;
  const values = held.map(({ read: { index, readAtMs, tag }, hold, batchId }) => {
    const facts = `${sqlInstant(readAtMs)},${siteId},${sqlBytes(tag.value)},${sqlCode(hold)}`;
    return `(${batchId},${index},${facts},${configVersion})`;
  });
  await connection.query(
    `INSERT INTO held (batch_id, seq, read_at, site_id, tag, code, config_version)
     VALUES ${values.join()}`,
  );
}
