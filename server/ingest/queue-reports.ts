import type { PoolConnection, UpsertResult } from 'mariadb';
import { inParts } from '../lib/bulk.js';

/** A unit, by its compact identity, whose history must be folded anew from `at` on. */
export interface ReportedUnit {
  unit: string;
  at: Date;
}

const UNITS_A_ROW = 500;

/**
 * The queue row that facts of one transaction are stored under: the first of those that
 * `fillReports` fills, and the `batch_id` by which it knows its own rows again.
 */
export async function openReports(connection: PoolConnection, receivedAt: Date): Promise<number> {
  return insertRow(connection, null, receivedAt);
}

/**
 * Tells the projector which units the transaction's new facts are about; each once, from its
 * earliest instant on. Without any the row opened for them goes again.
 */
export async function fillReports(
  connection: PoolConnection,
  { batchId, receivedAt, units }: { batchId: number; receivedAt: Date; units: ReportedUnit[] },
): Promise<void> {
  const [first, ...others] = inParts([...earliest(units)], UNITS_A_ROW).map((part) =>
    JSON.stringify({ units: part.map(([unit, at]) => [unit, new Date(at)]) }),
  );
  if (first === undefined) {
    await connection.query('DELETE FROM work WHERE id = ?', [batchId]);
    return;
  }
  await connection.query('UPDATE work SET payload = ? WHERE id = ?', [first, batchId]);
  for (const payload of others) await insertRow(connection, payload, receivedAt);
}

function earliest(units: ReportedUnit[]): Map<string, number> {
  const from = new Map<string, number>();
  for (const { unit, at } of units) {
    from.set(unit, Math.min(from.get(unit) ?? Infinity, at.getTime()));
  }
  return from;
}

async function insertRow(
  connection: PoolConnection,
  payload: string | null,
  receivedAt: Date,
): Promise<number> {
  const { insertId } = await connection.query<UpsertResult>(
    `INSERT INTO work (kind, lane, read_count, payload, received_at)
     VALUES ('reports', 0, 0, ?, ?)`,
    [payload, receivedAt],
  );
  return insertId as number;
}
