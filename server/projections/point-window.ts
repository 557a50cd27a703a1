import type { PoolConnection } from 'mariadb';
import {
  LONGEST_STOP_MS,
  type Network,
  type ReadPointConfiguration,
} from '../domain/movements/configuration.js';
import { WHEEL_REACH_MS, type WheelRecord } from '../domain/movements/own-direction.js';
import { hasSeveralOffsets } from '../domain/movements/passages.js';
import { STANDING_MS } from '../domain/movements/passes.js';
import { ALONE_MS } from '../domain/movements/strays.js';
import type { PassStart } from '../domain/movements/refold-point.js';
import type { SqlValue } from '../lib/bulk.js';
import type { PassageRow, PassRow } from './passage-rows.js';

/** The stored rows of a stretch of one read point's history. */
export interface Window {
  from: PassStart | null;
  /** Rows that begin up to here (ms) are in it. */
  until: number;
  passages: PassageRow[];
  passes: PassRow[];
  /** Nothing is stored behind it. */
  complete: boolean;
}

/**
 * The last clean start before anything that the facts can touch; null: from the very beginning.
 * What has stood in the beam for long reaches no further than when it came, unless it is read
 * again or a wheel record covers it.
 */
export async function startOfWindow(
  connection: PoolConnection,
  network: Network,
  point: ReadPointConfiguration,
  { since, unitIds, sensed }: { since: number; unitIds: ReadonlySet<number>; sensed: boolean },
): Promise<PassStart | null> {
  const reachMs = Math.max(point.visitGapSeconds * 1000, ALONE_MS);
  const touching = await firstAtOf(
    connection,
    `SELECT MIN(first_at) AS at FROM passages
     WHERE read_point_id = ? AND last_at >= ? AND first_at < ?
       AND (? OR first_at >= ? OR direction_basis IN ('sensors', 'antennas') OR unit_id IN (?))`,
    [
      point.id,
      new Date(since - reachMs),
      new Date(since),
      sensed,
      new Date(since - reachMs - STANDING_MS),
      unitIds.size ? [...unitIds] : [0],
    ],
  );
  const before = hasSeveralOffsets(network, point)
    ? await firstAtOf(
        connection,
        `SELECT MAX(first_at) AS at FROM passages
         WHERE read_point_id = ? AND first_at < ? AND first_at >= ? AND stray IS NULL`,
        [point.id, new Date(since), new Date(since - LONGEST_STOP_MS)],
      )
    : null;
  const earliest = Math.min(since, touching ?? since, before ?? since);
  const [start] = await connection.query<PassRow[]>(
    `SELECT * FROM passes WHERE read_point_id = ? AND clean_start = 1 AND started_at < ?
     ORDER BY started_at DESC LIMIT 1`,
    [point.id, new Date(earliest)],
  );
  return start ? startOf(start) : null;
}

async function firstAtOf(connection: PoolConnection, sql: string, values: (SqlValue | number[])[]) {
  const [row] = await connection.query<{ at: Date | null }[]>(sql, values);
  return row?.at?.getTime() ?? null;
}

/** The rows from the start of the stretch to `until` (ms). */
export async function loadWindow(
  connection: PoolConnection,
  readPointId: number,
  from: PassStart | null,
  until: number,
): Promise<Window> {
  const span = [readPointId, new Date(from?.startedAt ?? 0), new Date(until)];
  const passages = await connection.query<PassageRow[]>(
    'SELECT * FROM passages WHERE read_point_id = ? AND first_at >= ? AND first_at <= ?',
    span,
  );
  const passes = await connection.query<PassRow[]>(
    'SELECT * FROM passes WHERE read_point_id = ? AND started_at >= ? AND started_at <= ?',
    span,
  );
  const [later] = await connection.query<unknown[]>(
    'SELECT 1 FROM passages WHERE read_point_id = ? AND first_at > ? LIMIT 1',
    [readPointId, new Date(until)],
  );
  return { from, until, passages, passes, complete: !later };
}

/** Wheel records that bear on anything from `since` to `until` (ms). */
export async function loadWheels(
  connection: PoolConnection,
  readPointId: number,
  since: number,
  until: number,
): Promise<WheelRecord[]> {
  const rows = await connection.query<WheelRow[]>(
    `SELECT started_at, ended_at, direction, speed_kmh, axles FROM wheel_records
     WHERE read_point_id = ? AND ended_at >= ? AND started_at <= ?`,
    [readPointId, new Date(since - WHEEL_REACH_MS), new Date(until + WHEEL_REACH_MS)],
  );
  return rows.map((row) => ({
    startedAt: row.started_at.getTime(),
    endedAt: row.ended_at.getTime(),
    direction: row.direction,
    speedKmh: row.speed_kmh,
    axles: row.axles,
  }));
}

interface WheelRow {
  started_at: Date;
  ended_at: Date;
  direction: WheelRecord['direction'];
  speed_kmh: number | null;
  axles: number;
}

/** What a stored pass says of where a stretch may begin or end. */
export function startOf(row: PassRow): PassStart {
  return {
    startedAt: row.started_at.getTime(),
    ordinal: row.ordinal,
    reversal: Boolean(row.reversal),
    cleanStart: Boolean(row.clean_start),
  };
}
