import type { Pool, PoolConnection } from 'mariadb';

/** The next stretch of a read point that somebody wants made anew; instants in ms. */
export interface RebuildSpan {
  id: number;
  rebuildId: number;
  readPointId: number;
  nextAt: number;
  untilAt: number;
}

interface SpanRow {
  id: number;
  rebuild_id: number;
  read_point_id: number;
  next_at: Date;
  until_at: Date;
}

const OPEN = `rebuilds r JOIN rebuild_spans s ON s.rebuild_id = r.id AND s.done = 0
  WHERE r.state IN ('waiting', 'running')`;

/** The span to go on with: of the oldest rebuild that is not stopped; null when there is none. */
export async function takeRebuild(pool: Pick<Pool, 'query'>): Promise<RebuildSpan | null> {
  const [row] = await pool.query<SpanRow[]>(`SELECT s.* FROM ${OPEN} ORDER BY r.id, s.id LIMIT 1`);
  if (!row) return null;
  return {
    id: row.id,
    rebuildId: row.rebuild_id,
    readPointId: row.read_point_id,
    nextAt: row.next_at.getTime(),
    untilAt: row.until_at.getTime(),
  };
}

/** Notes how far a span has come, as part of the transaction of its effects. */
export async function advanceRebuild(
  connection: PoolConnection,
  { id, rebuildId, untilAt }: RebuildSpan,
  { reached, now }: { reached: number; now: Date },
): Promise<void> {
  await connection.query('UPDATE rebuild_spans SET next_at = ?, done = ? WHERE id = ?', [
    new Date(Math.min(reached, untilAt)),
    reached >= untilAt,
    id,
  ]);
  const [left] = await connection.query<unknown[]>(
    'SELECT 1 FROM rebuild_spans WHERE rebuild_id = ? AND done = 0 LIMIT 1',
    [rebuildId],
  );
  if (left) {
    await connection.query(
      `UPDATE rebuilds SET state = 'running' WHERE id = ? AND state = 'waiting'`,
      [rebuildId],
    );
  } else {
    await connection.query(`UPDATE rebuilds SET state = 'done', finished_at = ? WHERE id = ?`, [
      now,
      rebuildId,
    ]);
  }
}

/** Instant before which the ledger is gone and history stays as it is, ms; 0 when none is. */
export async function frozenBefore(pool: Pick<Pool, 'query'>): Promise<number> {
  const [row] = await pool.query<{ frozen_before: Date | null }[]>(
    'SELECT frozen_before FROM config_state WHERE id = 1',
  );
  return row?.frozen_before?.getTime() ?? 0;
}
