import type { PoolConnection } from 'mariadb';
import { withTransaction, type Database } from '../lib/database.js';

/**
 * Says that nothing before this instant is made anew any more, for the reads of it are about to
 * go. False, and nothing is said, while something before it waits to be folded. Never goes back.
 */
export async function freezeHistory(db: Database, before: Date): Promise<boolean> {
  return withTransaction(db.pool, async (connection) => {
    // Waits for changes of the configuration, and makes them wait, so that none plans behind it.
    await connection.query('SELECT version FROM config_state WHERE id = 1 FOR UPDATE');
    if (!(await isFolded(connection, before))) return false;
    await connection.query(
      `UPDATE config_state SET version = version + 1, frozen_before = ?
       WHERE id = 1 AND (frozen_before IS NULL OR frozen_before < ?)`,
      [before, before],
    );
    await cutStopped(connection, before);
    return true;
  });
}

/** Nothing of the ledger before `before` is left to fold, and no rebuild is at it. */
async function isFolded(connection: PoolConnection, before: Date): Promise<boolean> {
  const [row] = await connection.query<{ reads: number; rebuilds: number }[]>(
    `SELECT
       EXISTS (
         SELECT STRAIGHT_JOIN 1 FROM work w JOIN \`reads\` r ON r.batch_id = w.id
         WHERE w.kind = 'reads' AND r.read_at < ?
           AND (r.hold_code IS NULL OR r.hold_code <> 'too-old')
       ) AS \`reads\`,
       EXISTS (
         SELECT 1 FROM rebuilds b JOIN rebuild_spans s ON s.rebuild_id = b.id
         WHERE b.state IN ('waiting', 'running') AND s.done = 0 AND s.next_at < ?
       ) AS rebuilds`,
    [before, before],
  );
  if (!row || row.reads || row.rebuilds) return false;
  const others = await connection.query<{ payload: string | null }[]>(
    "SELECT payload FROM work WHERE kind IN ('released', 'wheels')",
  );
  return others.every(({ payload }) => instantsIn(payload).every((at) => at >= before.getTime()));
}

/** Every instant that the payload of a queue row names, ms. */
function instantsIn(payload: string | null): number[] {
  const found = (payload ?? '').match(/\d{4}-\d\d-\d\dT[\d:.]+Z/g) ?? [];
  return found.map((text) => Date.parse(text));
}

/** What somebody stopped and left waits for nobody: its frozen part is given up. */
async function cutStopped(connection: PoolConnection, before: Date): Promise<void> {
  await connection.query(
    `UPDATE rebuild_spans SET done = 1, next_at = until_at WHERE done = 0 AND until_at <= ?`,
    [before],
  );
  await connection.query(
    `UPDATE rebuild_spans SET since_at = GREATEST(since_at, ?), next_at = GREATEST(next_at, ?)
     WHERE done = 0 AND next_at < ?`,
    [before, before, before],
  );
  await connection.query(
    `UPDATE rebuilds SET state = 'done', finished_at = NOW(3)
     WHERE state = 'stopped' AND NOT EXISTS (
       SELECT 1 FROM rebuild_spans s WHERE s.rebuild_id = rebuilds.id AND s.done = 0)`,
  );
}
