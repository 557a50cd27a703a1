import type { PoolConnection, UpsertResult } from 'mariadb';
import type { IngestAnswer, WheelsBody } from '../contract/ingest.js';
import { invalid } from '../errors.js';
import { withTransaction, type Database } from '../lib/database.js';
import { asUnavailable } from './as-unavailable.js';

export interface WheelsInput {
  site: { id: number; code: string };
  record: WheelsBody;
  receivedAt: Date;
}

/**
 * Takes one wheel record in; the same read point and start again is a duplicate and changes
 * nothing. Throws a 400 problem for a read point that the site does not have, 503 when the
 * database is away.
 */
export async function ingestWheels(db: Database, input: WheelsInput): Promise<IngestAnswer> {
  const isNew = await asUnavailable(() =>
    withTransaction(db.pool, (connection) => append(connection, input)),
  );
  return {
    accepted: isNew ? 1 : 0,
    duplicates: isNew ? 0 : 1,
    held: 0,
    rejected: 0,
    problems: [],
  };
}

async function append(
  connection: PoolConnection,
  { site, record, receivedAt }: WheelsInput,
): Promise<boolean> {
  const readPointId = await findReadPoint(connection, site.id, record.readPoint);
  if (readPointId === null) {
    throw invalid('This site has no such read point.', [
      { pointer: '/readPoint', detail: `${site.code} has no read point of this code` },
    ]);
  }
  const { startedAt, endedAt, axles, speedKmh = null } = record;
  const direction = record.direction === 'unknown' ? null : (record.direction ?? null);
  const result = await connection.query<UpsertResult>(
    `INSERT INTO wheel_records
       (read_point_id, started_at, ended_at, axles, direction, speed_kmh, received_at)
     VALUES (?, ?, ?, ?, ?, ?, ?)
     ON DUPLICATE KEY UPDATE axles = wheel_records.axles`,
    [readPointId, startedAt, endedAt, axles, direction, speedKmh, receivedAt],
  );
  if (result.affectedRows === 0) return false;
  await connection.query(
    'INSERT INTO work (kind, lane, read_count, payload, received_at) VALUES (?, 0, 0, ?, ?)',
    ['wheels', JSON.stringify({ readPointId, startedAt, endedAt }), receivedAt],
  );
  return true;
}

async function findReadPoint(connection: PoolConnection, siteId: number, code: string) {
  const [row] = await connection.query<{ id: number }[]>(
    'SELECT id FROM read_points WHERE site_id = ? AND code = ?',
    [siteId, code],
  );
  return row?.id ?? null;
}
